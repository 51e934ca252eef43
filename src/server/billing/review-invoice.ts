/** Finance's review of an invoice: approve, question, or put back. Every step is kept; a question goes to the operator. */
import { inWriteTransaction } from '@db/in-write-transaction.ts';
import { InvoiceReview } from '@db/models/billing.ts';
import type { InvoiceDocument, reviewStates } from '@/contracts/billing.ts';
import { accept, refuse, type Result } from '@/domain/refusals.ts';
import type { Actor } from '@/domain/teams/actor.ts';
import { nowText } from '../clock.ts';
import { newId } from '../ids.ts';
import { addInvoiceMessage } from './add-invoice-message.ts';
import { describeInvoice } from './describe-invoices.ts';
import { findInvoice } from './find-invoice.ts';

/** A question needs words. */
export async function reviewInvoice(options: {
  actor: Actor;
  team: string;
  invoiceId: string;
  state: (typeof reviewStates)[number];
  comment: string;
}): Promise<Result<{ invoice: InvoiceDocument }>> {
  const found = await findInvoice({ ...options, permission: 'billing:write' });
  if (!found.ok) return found;
  const { invoice, authorised } = found.value;
  const { state, comment } = options;
  if (state === 'questioned' && comment === '') {
    const message = 'Say what is in question.';
    return refuse('invalid_input', message, { errors: [{ path: 'comment', code: 'missing', message }] });
  }
  return inWriteTransaction(async () => {
    const { userId } = authorised;
    await InvoiceReview.create({ id: newId('request'), invoiceId: invoice.id, userId, state, comment, at: nowText() });
    if (state === 'questioned') {
      const asked = await addInvoiceMessage({ invoice, side: 'team', userId, body: comment });
      if (!asked.ok) return asked;
    }
    return accept({ invoice: await describeInvoice(invoice) });
  });
}
