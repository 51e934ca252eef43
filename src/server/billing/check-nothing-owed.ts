/** Whether a team may launch: not while it owes for a payment that a bank took back. */
import { Invoice } from '@db/models/billing.ts';
import { Receivable } from '@db/models/cards.ts';
import { moneyText } from '@/domain/billing/money-text.ts';
import { accept, refuse, type Result } from '@/domain/refusals.ts';

export async function checkNothingOwed(teamId: string): Promise<Result<null>> {
  const owed = await Receivable.findOne({ where: { teamId, state: 'open' }, order: [['id', 'ASC']] });
  if (!owed) return accept(null);
  const { number } = await Invoice.findByPk(owed.invoiceId, { rejectOnEmpty: true });
  return refuse(
    'payment_owed',
    `The bank took the payment for invoice ${number} back, and ${moneyText(owed.totalMinor, owed.currency)} of it had been spent. No job can be launched until that is paid; ask the team’s finance admin. Jobs that run go on.`,
  );
}
