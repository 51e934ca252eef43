import * as contracts from '@/contracts/billing.ts';
import { endpoint } from '@/server/http/endpoint.ts';
import { decideReceivable } from '@/server/operate/decide-receivable.ts';

export const POST = endpoint(contracts.decideReceivable, ({ actor, parameters: { receivable = '' }, body }) =>
  decideReceivable({ actor, receivableId: receivable, ...body }),
);
