/** One invoice of the team. */
import type { InvoiceDocument } from '@/contracts/billing.ts';
import { accept, type Result } from '@/domain/refusals.ts';
import type { Actor } from '@/domain/teams/actor.ts';
import { describeInvoice } from './describe-invoices.ts';
import { findInvoice } from './find-invoice.ts';

export async function readInvoice(options: {
  actor: Actor;
  team: string;
  invoiceId: string;
}): Promise<Result<{ invoice: InvoiceDocument }>> {
  const found = await findInvoice({ ...options, permission: 'billing:read' });
  return found.ok ? accept({ invoice: await describeInvoice(found.value.invoice) }) : found;
}
