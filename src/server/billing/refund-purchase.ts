/** Takes unused credits of one purchase back and gives their money back, with a credit note. */
import { Invoice } from '@db/models/billing.ts';
import type { CreditReturn } from '@db/models/billing.ts';
import { accept, refuse, type Result } from '@/domain/refusals.ts';
import type { Actor } from '@/domain/teams/actor.ts';
import { recordAct } from '../operate/record-act.ts';
import { requireOperator } from '../operate/require-operator.ts';
import { answerOnce, type Idempotency } from '../http/answer-once.ts';
import { newId } from '../ids.ts';
import { refundLot } from '../ledger/refund-lot.ts';
import { findRefundable } from './find-refundable.ts';
import { issueCreditNote } from './issue-credit-note.ts';
import { sendRefund } from './send-refund.ts';

export interface RefundPurchase {
  actor: Actor;
  invoiceId: string;
  /** Absent: all that can be refunded now. */
  amountMicrocredits?: number | undefined;
  reason: string;
  idempotency?: Idempotency | undefined;
}

export interface Refunded {
  returnId: string;
  creditNoteId: string;
  amountMicrocredits: number;
  total: { amountMinor: number; currency: string };
}

/**
 * Credits leave and the credit note is issued in one transaction; then the money is sent, by a call that is repeated
 * until the payment service has answered. What was bought by transfer is paid back by hand.
 */
export async function refundPurchase(options: RefundPurchase): Promise<Result<Refunded>> {
  const { actor, idempotency } = options;
  const operator = requireOperator(actor);
  if (!operator.ok) return operator;
  const refunded = await answerOnce(idempotency, () => takeBack(options, operator.value.userId));
  if (refunded.ok) await sendRefund(refunded.value.returnId);
  return refunded;
}

async function takeBack(options: RefundPurchase, userId: string | null): Promise<Result<Refunded>> {
  const { invoiceId, reason } = options;
  const invoice = await Invoice.findOne({ where: { id: invoiceId, kind: 'invoice' } });
  if (!invoice) return refuse('not_found', 'There is no such invoice.');
  const { teamId } = invoice;
  const { lot, freeMicrocredits, disputed } = await findRefundable(invoice);
  if (disputed)
    return refuse('insufficient_credits', 'This payment is disputed: the bank gives the money back, not we.');
  const amountMicrocredits = options.amountMicrocredits ?? freeMicrocredits;
  if (!lot || amountMicrocredits === 0)
    return refuse(
      'insufficient_credits',
      'Nothing of this purchase can be refunded now: it is spent, held or disputed.',
    );
  const returnId = newId('return');
  const taken = await refundLot({ teamId, lotId: lot.id, amountMicrocredits, refundId: returnId, userId });
  if (!taken.ok) return taken;
  const row = await issueCreditNote({ returnId, cause: 'refund', invoice, lot, amountMicrocredits, reason, userId });
  if (row.totalMinor === 0)
    return refuse('invalid_input', 'So few credits are worth less than the smallest coin. Refund more of them.');
  const details = { microcredits: amountMicrocredits, reason };
  await recordAct({ userId, act: 'refund_purchase', teamId, subjectId: row.creditNoteId, details });
  return accept(describe(row));
}

const describe = (row: CreditReturn): Refunded => ({
  returnId: row.id,
  creditNoteId: row.creditNoteId,
  amountMicrocredits: row.amountMicrocredits,
  total: { amountMinor: row.totalMinor, currency: row.currency },
});
