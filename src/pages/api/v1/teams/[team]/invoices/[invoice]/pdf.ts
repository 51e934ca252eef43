import * as contracts from '@/contracts/billing.ts';
import { downloadInvoicePdf } from '@/server/billing/download-invoice-pdf.ts';
import { pdfResponse } from '@/server/billing/file-response.ts';
import { endpoint } from '@/server/http/endpoint.ts';

export const GET = endpoint(
  contracts.downloadInvoicePdf,
  async ({ actor, parameters: { team = '', invoice = '' } }) => {
    const printed = await downloadInvoicePdf({ actor, team, invoiceId: invoice });
    return printed.ok ? pdfResponse(printed.value) : printed;
  },
);
