/** An operator answers a team about an invoice. */
import { inWriteTransaction } from '@db/in-write-transaction.ts';
import { Invoice } from '@db/models/billing.ts';
import { refuse, type Result } from '@/domain/refusals.ts';
import type { Actor } from '@/domain/teams/actor.ts';
import { addInvoiceMessage } from '../billing/add-invoice-message.ts';
import { readQuestionedInvoice, type InvoiceThread } from './read-questioned-invoice.ts';
import { recordAct } from './record-act.ts';
import { requireOperator } from './require-operator.ts';

export async function answerInvoice(options: {
  actor: Actor;
  invoiceId: string;
  body: string;
}): Promise<Result<InvoiceThread>> {
  const { actor, invoiceId, body } = options;
  const operator = requireOperator(actor);
  if (!operator.ok) return operator;
  const { userId } = operator.value;
  return inWriteTransaction(async () => {
    const invoice = await Invoice.findByPk(invoiceId);
    if (!invoice) return refuse('not_found', 'There is no such invoice.');
    const added = await addInvoiceMessage({ invoice, side: 'operator', userId, body });
    if (!added.ok) return added;
    const { teamId } = invoice;
    await recordAct({ userId, act: 'answer_invoice', teamId, subjectId: invoice.id, details: { body } });
    return readQuestionedInvoice({ actor, invoiceId });
  });
}
