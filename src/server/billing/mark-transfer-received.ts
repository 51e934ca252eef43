/** An operator says that the transfer of a pro-forma has arrived: credits and the tax invoice follow. */
import { afterCommit, inWriteTransaction } from '@db/in-write-transaction.ts';
import { ProForma } from '@db/models/billing.ts';
import { accept, refuse, type Result } from '@/domain/refusals.ts';
import type { Actor } from '@/domain/teams/actor.ts';
import { nowText } from '../clock.ts';
import { recordAct } from '../operate/record-act.ts';
import { requireOperator } from '../operate/require-operator.ts';
import { issueBoughtCredits } from '../ledger/issue-bought-credits.ts';
import { faceOf } from './face-of.ts';
import { issueInvoice } from './issue-invoice.ts';
import { wakeBilling } from './wake-billing.ts';

/** Marking twice changes nothing and answers the same invoice. One that expired or was cancelled is refused. */
export async function markTransferReceived(options: {
  actor: Actor;
  proFormaId: string;
}): Promise<Result<{ invoiceId: string }>> {
  const { actor, proFormaId } = options;
  const operator = requireOperator(actor);
  if (!operator.ok) return operator;
  return inWriteTransaction(async () => {
    const row = await ProForma.findByPk(proFormaId);
    if (!row) return refuse('not_found', 'There is no such pro-forma.');
    if (row.state !== 'open' && row.state !== 'paid')
      return refuse('invalid_input', `This pro-forma is ${row.state}. Open a new one for this payment.`);
    const paidAt = nowText();
    const { userId } = operator.value;
    if (row.state === 'open') {
      await row.update({ state: 'paid', decidedAt: paidAt });
      const { id: subjectId, number } = row;
      await recordAct({ userId, act: 'mark_transfer_received', teamId: row.teamId, subjectId, details: { number } });
    }
    const { teamId, creditsMicrocredits, netMinor, currency } = row;
    await issueBoughtCredits({
      teamId,
      creditsMicrocredits,
      netMinor,
      currency,
      purchaseId: row.id,
      userId,
      memo: { proFormaId: row.id },
    });
    const invoice = await issueInvoice({ teamId, face: faceOf(row), paidAt, proFormaId: row.id });
    afterCommit(wakeBilling);
    return accept({ invoiceId: invoice.id });
  });
}
