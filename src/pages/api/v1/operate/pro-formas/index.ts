import * as contracts from '@/contracts/operate.ts';
import { endpoint } from '@/server/http/endpoint.ts';
import { listOpenTransfers } from '@/server/operate/list-open-transfers.ts';

export const GET = endpoint(contracts.listOpenTransfers, ({ actor, query }) => listOpenTransfers({ actor, ...query }));
