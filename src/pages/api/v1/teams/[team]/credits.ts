import * as contracts from '@/contracts/ledger.ts';
import { endpoint } from '@/server/http/endpoint.ts';
import { readCredits } from '@/server/ledger/read-credits.ts';

export const GET = endpoint(contracts.readCredits, ({ actor, parameters: { team = '' } }) =>
  readCredits({ actor, team }),
);
