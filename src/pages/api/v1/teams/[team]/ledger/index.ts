import * as contracts from '@/contracts/ledger.ts';
import { endpoint } from '@/server/http/endpoint.ts';
import { listLedger } from '@/server/ledger/list-ledger.ts';

export const GET = endpoint(contracts.listLedger, ({ actor, parameters: { team = '' }, query }) =>
  listLedger({ actor, team, ...query }),
);
