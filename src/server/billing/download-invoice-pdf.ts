/** The PDF of an invoice of the team. */
import { accept, type Result } from '@/domain/refusals.ts';
import type { Actor } from '@/domain/teams/actor.ts';
import { findInvoice } from './find-invoice.ts';
import type { PrintedFile } from './file-response.ts';
import { printInvoice } from './print-invoice.ts';

export async function downloadInvoicePdf(options: {
  actor: Actor;
  team: string;
  invoiceId: string;
}): Promise<Result<PrintedFile>> {
  const found = await findInvoice({ ...options, permission: 'billing:read' });
  if (!found.ok) return found;
  const { invoice } = found.value;
  return accept({ content: await printInvoice(invoice), filename: `${invoice.number}.pdf` });
}
