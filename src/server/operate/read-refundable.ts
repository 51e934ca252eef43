/** What of an invoice can be refunded now, and what has been. */
import { CreditReturn, Invoice } from '@db/models/billing.ts';
import type { Refundable } from '@/contracts/refunds.ts';
import { accept, refuse, type Result } from '@/domain/refusals.ts';
import type { Actor } from '@/domain/teams/actor.ts';
import { findRefundable } from '../billing/find-refundable.ts';
import { requireOperator } from './require-operator.ts';

export async function readRefundable(options: { actor: Actor; invoiceId: string }): Promise<Result<Refundable>> {
  const operator = requireOperator(options.actor);
  if (!operator.ok) return operator;
  const invoice = await Invoice.findByPk(options.invoiceId);
  if (!invoice) return refuse('not_found', 'There is no such invoice.');
  const { lot, freeMicrocredits, disputed } = await findRefundable(invoice);
  const rows = await CreditReturn.findAll({ where: { invoiceId: invoice.id }, order: [['createdAt', 'ASC']] });
  const notes = await Invoice.findAll({ where: { id: rows.map(({ creditNoteId }) => creditNoteId) } });
  return accept({
    refundableMicrocredits: freeMicrocredits,
    remainingMicrocredits: lot?.remainingMicrocredits ?? 0,
    disputed,
    returns: rows.map((row) => ({
      id: row.id,
      cause: row.cause,
      state: row.state,
      amountMicrocredits: row.amountMicrocredits,
      total: { amountMinor: row.totalMinor, currency: row.currency },
      creditNoteNumber: notes.find(({ id }) => id === row.creditNoteId)?.number ?? '',
      reason: row.reason,
      createdAt: row.createdAt,
      problem: row.problem,
    })),
  });
}
