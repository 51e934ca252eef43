import * as contracts from '@/contracts/billing.ts';
import { downloadInvoiceUbl } from '@/server/billing/download-invoice-ubl.ts';
import { fileResponse } from '@/server/billing/file-response.ts';
import { endpoint } from '@/server/http/endpoint.ts';

export const GET = endpoint(
  contracts.downloadInvoiceUbl,
  async ({ actor, parameters: { team = '', invoice = '' } }) => {
    const written = await downloadInvoiceUbl({ actor, team, invoiceId: invoice });
    return written.ok ? fileResponse(written.value, 'application/xml') : written;
  },
);
