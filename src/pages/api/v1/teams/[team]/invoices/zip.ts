import * as contracts from '@/contracts/billing.ts';
import { downloadInvoices } from '@/server/billing/download-invoices.ts';
import { endpoint } from '@/server/http/endpoint.ts';

export const GET = endpoint(contracts.downloadInvoices, async ({ actor, parameters: { team = '' }, query }) => {
  const made = await downloadInvoices({ actor, team, ...query });
  if (!made.ok) return made;
  const { filename, bytes, stream } = made.value;
  return new Response(stream, {
    headers: {
      'Content-Type': 'application/zip',
      'Content-Length': String(bytes),
      'Content-Disposition': `attachment; filename="${filename}"`,
      'Cache-Control': 'private, no-store',
    },
  });
});
