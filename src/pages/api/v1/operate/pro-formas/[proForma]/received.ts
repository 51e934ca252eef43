import * as contracts from '@/contracts/billing.ts';
import { markTransferReceived } from '@/server/billing/mark-transfer-received.ts';
import { endpoint } from '@/server/http/endpoint.ts';

export const POST = endpoint(contracts.markTransferReceived, ({ actor, parameters: { proForma = '' } }) =>
  markTransferReceived({ actor, proFormaId: proForma }),
);
