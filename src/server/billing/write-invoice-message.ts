/** The team writes to the operator about an invoice. */
import { inWriteTransaction } from '@db/in-write-transaction.ts';
import type { InvoiceMessageDocument } from '@/contracts/invoices.ts';
import { accept, type Result } from '@/domain/refusals.ts';
import type { Actor } from '@/domain/teams/actor.ts';
import { addInvoiceMessage } from './add-invoice-message.ts';
import { findInvoice } from './find-invoice.ts';
import { presentInvoiceMessages } from './present-invoice-messages.ts';

export async function writeInvoiceMessage(options: {
  actor: Actor;
  team: string;
  invoiceId: string;
  body: string;
}): Promise<Result<{ messages: InvoiceMessageDocument[] }>> {
  const found = await findInvoice({ ...options, permission: 'billing:write' });
  if (!found.ok) return found;
  const { invoice, authorised } = found.value;
  return inWriteTransaction(async () => {
    const added = await addInvoiceMessage({ invoice, side: 'team', userId: authorised.userId, body: options.body });
    return added.ok ? accept({ messages: await presentInvoiceMessages(invoice.id) }) : added;
  });
}
