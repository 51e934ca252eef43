/** What the team and the operator wrote to each other about an invoice. */
import type { InvoiceMessageDocument } from '@/contracts/invoices.ts';
import { accept, type Result } from '@/domain/refusals.ts';
import type { Actor } from '@/domain/teams/actor.ts';
import { findInvoice } from './find-invoice.ts';
import { presentInvoiceMessages } from './present-invoice-messages.ts';

export async function listInvoiceMessages(options: {
  actor: Actor;
  team: string;
  invoiceId: string;
}): Promise<Result<{ messages: InvoiceMessageDocument[] }>> {
  const found = await findInvoice({ ...options, permission: 'billing:read' });
  if (!found.ok) return found;
  return accept({ messages: await presentInvoiceMessages(found.value.invoice.id) });
}
