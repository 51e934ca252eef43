import * as contracts from '@/contracts/billing.ts';
import { downloadProFormaPdf } from '@/server/billing/download-pro-forma-pdf.ts';
import { pdfResponse } from '@/server/billing/file-response.ts';
import { endpoint } from '@/server/http/endpoint.ts';

export const GET = endpoint(
  contracts.downloadProFormaPdf,
  async ({ actor, parameters: { team = '', proForma = '' } }) => {
    const printed = await downloadProFormaPdf({ actor, team, proFormaId: proForma });
    return printed.ok ? pdfResponse(printed.value) : printed;
  },
);
