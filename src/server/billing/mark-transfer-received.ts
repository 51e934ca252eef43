/** An operator says that the transfer of a pro-forma has arrived: credits and the tax invoice follow. */
import { afterCommit, inWriteTransaction } from '@db/in-write-transaction.ts';
import { ProForma } from '@db/models/billing.ts';
import { accept, refuse, type Result } from '@/domain/refusals.ts';
import type { Actor } from '@/domain/teams/actor.ts';
import { nowText } from '../clock.ts';
import { issueBoughtCredits } from '../ledger/issue-bought-credits.ts';
import { faceOf } from './face-of.ts';
import { issueInvoice } from './issue-invoice.ts';
import { wakeReceipts } from './wake-receipts.ts';

/** Marking twice changes nothing and answers the same invoice. One that expired or was cancelled is refused. */
export async function markTransferReceived(options: {
  actor: Actor;
  proFormaId: string;
}): Promise<Result<{ invoiceId: string }>> {
  const { actor, proFormaId } = options;
  if (actor.kind === 'anonymous') return refuse('not_signed_in', 'Sign in.');
  const isOperator = actor.kind === 'system' || (actor.kind === 'user' && actor.operator);
  if (!isOperator) return refuse('not_found', 'There is nothing here.');
  return inWriteTransaction(async () => {
    const row = await ProForma.findByPk(proFormaId);
    if (!row) return refuse('not_found', 'There is no such pro-forma.');
    if (row.state !== 'open' && row.state !== 'paid')
      return refuse('invalid_input', `This pro-forma is ${row.state}. Open a new one for this payment.`);
    const paidAt = nowText();
    if (row.state === 'open') await row.update({ state: 'paid', decidedAt: paidAt });
    const { teamId, creditsMicrocredits, netMinor, currency } = row;
    await issueBoughtCredits({
      teamId,
      creditsMicrocredits,
      netMinor,
      currency,
      purchaseId: row.id,
      userId: actor.kind === 'user' ? actor.userId : null,
      memo: { proFormaId: row.id },
    });
    const invoice = await issueInvoice({ teamId, face: faceOf(row), paidAt, proFormaId: row.id });
    afterCommit(wakeReceipts);
    return accept({ invoiceId: invoice.id });
  });
}
