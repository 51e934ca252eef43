import * as contracts from '@/contracts/billing.ts';
import { endpoint } from '@/server/http/endpoint.ts';
import { listDisputes } from '@/server/operate/list-disputes.ts';

export const GET = endpoint(contracts.listDisputes, ({ actor }) => listDisputes({ actor }));
