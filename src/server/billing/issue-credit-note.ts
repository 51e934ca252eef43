/** Issues a credit note for credits that have just been taken back, and remembers how the money is to go. */
import { afterCommit, inWriteTransaction } from '@db/in-write-transaction.ts';
import { CreditReturn, Invoice, TopUp } from '@db/models/billing.ts';
import { composeCreditNote, netOfReturn } from '@/domain/billing/credit-note.ts';
import { nowText } from '../clock.ts';
import { newId } from '../ids.ts';
import type { OpenLotRow } from '../ledger/read-open-lots.ts';
import { faceOf } from './face-of.ts';
import { nextInvoiceNumber } from './next-invoice-number.ts';
import { wakeBilling } from './wake-billing.ts';

/** A series of its own, without gaps. */
export const creditNoteSeries = 'BCN';

export interface IssueCreditNote {
  /** Names the return; the ledger transaction carries it too. */
  returnId: string;
  cause: CreditReturn['cause'];
  invoice: Invoice;
  /** The lot as it was before the credits were taken back. */
  lot: OpenLotRow;
  amountMicrocredits: number;
  /** A sentence that stands on the note. */
  reason: string;
  userId: string | null;
}

/** Joins the caller's write transaction, which has moved the credits. The same return again answers its first note. */
export async function issueCreditNote(options: IssueCreditNote): Promise<CreditReturn> {
  const { returnId, cause, invoice, lot, amountMicrocredits, reason, userId } = options;
  return inWriteTransaction(async () => {
    const known = await CreditReturn.findByPk(returnId);
    if (known) return known;
    const earlier = await CreditReturn.findAll({ where: { invoiceId: invoice.id } });
    const sum = (field: 'netMinor' | 'taxMinor' | 'amountMicrocredits') =>
      earlier.reduce((total, row) => total + row[field], 0);
    const credited = { netMinor: sum('netMinor'), taxMinor: sum('taxMinor') };
    const netMinor = netOfReturn(
      { ...lot, returnedMicrocredits: sum('amountMicrocredits'), creditedNetMinor: credited.netMinor },
      amountMicrocredits,
    );
    const face = composeCreditNote({
      invoice: { ...faceOf(invoice), number: invoice.number, issuedAt: invoice.issuedAt },
      amountMicrocredits,
      netMinor,
      credited,
      reason,
    });
    const issuedAt = nowText();
    const note = await Invoice.create({
      id: newId('invoice'),
      kind: 'credit_note',
      ...(await nextInvoiceNumber(creditNoteSeries, issuedAt)),
      teamId: invoice.teamId,
      issuedAt,
      taxPoint: issuedAt,
      paidAt: issuedAt,
      topUpId: null,
      proFormaId: null,
      correctsInvoiceId: invoice.id,
      ...face,
    });
    const topUp = invoice.topUpId ? await TopUp.findByPk(invoice.topUpId) : null;
    const byCard = topUp ? 'pending' : 'by_transfer';
    const { totalMinor, taxMinor, currency } = face;
    afterCommit(wakeBilling);
    return CreditReturn.create({
      id: returnId,
      teamId: invoice.teamId,
      cause,
      lotId: lot.id,
      invoiceId: invoice.id,
      creditNoteId: note.id,
      amountMicrocredits,
      netMinor,
      taxMinor,
      totalMinor,
      currency,
      reason,
      userId,
      state: cause === 'dispute' ? 'taken' : totalMinor === 0 ? 'sent' : byCard,
      paymentIntentId: topUp?.paymentIntentId ?? null,
      idempotencyKey: `refund:${returnId}`,
      createdAt: issuedAt,
    });
  });
}
