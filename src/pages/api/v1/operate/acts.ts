import * as contracts from '@/contracts/operate.ts';
import { endpoint } from '@/server/http/endpoint.ts';
import { listOperatorActs } from '@/server/operate/list-operator-acts.ts';

export const GET = endpoint(contracts.listOperatorActs, ({ actor, query }) => listOperatorActs({ actor, ...query }));
