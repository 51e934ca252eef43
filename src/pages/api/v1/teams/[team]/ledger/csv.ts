import * as contracts from '@/contracts/ledger.ts';
import { csvResponse } from '@/server/http/csv-response.ts';
import { endpoint } from '@/server/http/endpoint.ts';
import { exportLedger } from '@/server/ledger/export-ledger.ts';

export const GET = endpoint(contracts.exportLedger, async ({ actor, parameters: { team = '' }, query }) => {
  const exported = await exportLedger({ actor, team, ...query });
  return exported.ok ? csvResponse(exported.value.filename, exported.value.pieces) : exported;
});
