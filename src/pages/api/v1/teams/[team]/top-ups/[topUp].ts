import * as contracts from '@/contracts/billing.ts';
import { readTopUp } from '@/server/billing/read-top-up.ts';
import { endpoint } from '@/server/http/endpoint.ts';

export const GET = endpoint(contracts.readTopUp, ({ actor, parameters: { team = '', topUp = '' } }) =>
  readTopUp({ actor, team, topUpId: topUp }),
);
