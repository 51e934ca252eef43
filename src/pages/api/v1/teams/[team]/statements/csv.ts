import * as contracts from '@/contracts/statements.ts';
import { csvResponse } from '@/server/http/csv-response.ts';
import { endpoint } from '@/server/http/endpoint.ts';
import { exportStatement } from '@/server/statements/export-statement.ts';

export const GET = endpoint(contracts.exportStatement, async ({ actor, parameters: { team = '' }, query }) => {
  const exported = await exportStatement({ actor, team, ...query });
  return exported.ok ? csvResponse(exported.value.filename, exported.value.pieces) : exported;
});
