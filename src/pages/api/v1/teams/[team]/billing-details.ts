import * as contracts from '@/contracts/billing.ts';
import { readBillingDetails } from '@/server/billing/read-billing-details.ts';
import { setBillingDetails } from '@/server/billing/set-billing-details.ts';
import { endpoint } from '@/server/http/endpoint.ts';

export const GET = endpoint(contracts.readBillingDetails, ({ actor, parameters: { team = '' } }) =>
  readBillingDetails({ actor, team }),
);

export const PUT = endpoint(contracts.setBillingDetails, ({ actor, parameters: { team = '' }, body }) =>
  setBillingDetails({ actor, team, billingDetails: body }),
);
