import * as contracts from '@/contracts/billing.ts';
import { readAutomaticTopUp } from '@/server/billing/read-automatic-top-up.ts';
import { setAutomaticTopUp } from '@/server/billing/set-automatic-top-up.ts';
import { endpoint } from '@/server/http/endpoint.ts';

export const GET = endpoint(contracts.readAutomaticTopUp, ({ actor, parameters: { team = '' } }) =>
  readAutomaticTopUp({ actor, team }),
);

export const PUT = endpoint(contracts.setAutomaticTopUp, ({ actor, parameters: { team = '' }, body }) =>
  setAutomaticTopUp({ actor, team, ...body }),
);
