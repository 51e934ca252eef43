import * as contracts from '@/contracts/billing.ts';
import { exportInvoices } from '@/server/billing/export-invoices.ts';
import { csvResponse } from '@/server/http/csv-response.ts';
import { endpoint } from '@/server/http/endpoint.ts';

export const GET = endpoint(contracts.exportInvoices, async ({ actor, parameters: { team = '' }, query }) => {
  const exported = await exportInvoices({ actor, team, ...query });
  return exported.ok ? csvResponse(exported.value.filename, exported.value.pieces) : exported;
});
