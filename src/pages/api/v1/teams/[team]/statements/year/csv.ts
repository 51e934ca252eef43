import * as contracts from '@/contracts/statements.ts';
import { csvResponse } from '@/server/http/csv-response.ts';
import { endpoint } from '@/server/http/endpoint.ts';
import { exportYearSummary } from '@/server/statements/export-year-summary.ts';

export const GET = endpoint(contracts.exportYearSummary, async ({ actor, parameters: { team = '' }, query }) => {
  const exported = await exportYearSummary({ actor, team, ...query });
  return exported.ok ? csvResponse(exported.value.filename, exported.value.pieces) : exported;
});
