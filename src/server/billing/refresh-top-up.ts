/** Asks the payment service how a top-up stands and does what follows: the one path on which card payments issue credits. */
import { afterCommit, inWriteTransaction } from '@db/in-write-transaction.ts';
import { TopUp } from '@db/models/billing.ts';
import { Team } from '@db/models/people.ts';
import { decideTopUp, type TopUpDecision } from '@/domain/billing/decide-top-up.ts';
import { composeFace } from '@/domain/billing/invoice-face.ts';
import { microcreditsPerCredit } from '@/domain/pricing/price-book.ts';
import { accept, refuse, type Result } from '@/domain/refusals.ts';
import { nowText } from '../clock.ts';
import { issueBoughtCredits } from '../ledger/issue-bought-credits.ts';
import { log } from '../log.ts';
import { issueInvoice } from './issue-invoice.ts';
import { fetchCheckout } from './payment-service.ts';
import { readBooksRate } from './read-books-rate.ts';
import { refreshCharge } from './refresh-charge.ts';
import { seller } from './seller.ts';
import { stopAutomaticTopUp } from './stop-automatic-top-up.ts';
import { wakeBilling } from './wake-billing.ts';

/**
 * Safe to call any number of times, from webhook and reconciler at once: the decision is applied to the row as it
 * stands inside the write transaction, and what is paid stays paid.
 */
export async function refreshTopUp(topUpId: string): Promise<Result<TopUpDecision['kind']>> {
  const topUp = await TopUp.findByPk(topUpId);
  if (!topUp) return refuse('not_found', 'There is no such top-up.');
  if (topUp.state === 'paid') return accept('paid');
  const asked = topUp.way === 'automatic' ? await refreshCharge(topUp) : await askAboutCheckout(topUp);
  if (!asked.ok) return asked;
  const decision = asked.value;
  if (decision.kind === 'mismatch')
    log().error({ topUpId, fields: decision.fields }, 'the payment service answers another payment than the top-up’s');
  await inWriteTransaction(async () => {
    await topUp.reload();
    if (mayChange(topUp, decision)) await apply(topUp, decision);
  });
  return accept(decision.kind);
}

/** What is paid stays so; an automatic top-up that failed has been told of, and only a payment changes it. */
const mayChange = (topUp: TopUp, decision: TopUpDecision): boolean =>
  topUp.state !== 'paid' &&
  (topUp.way === 'checkout' || decision.kind === 'paid' || topUp.state === 'pending' || topUp.state === 'processing');

/** A checkout whose opening failed has never been shown to anybody, so it cannot have been paid. */
async function askAboutCheckout(topUp: TopUp): Promise<Result<TopUpDecision>> {
  if (!topUp.sessionId)
    return topUp.expiresAt > nowText()
      ? accept({ kind: 'pending', problem: topUp.problem })
      : accept({ kind: 'failed', problem: 'The checkout could not be opened.' });
  const fetched = await fetchCheckout(topUp.sessionId);
  return fetched.ok ? accept(decideTopUp(topUp, fetched.value)) : fetched;
}

async function apply(topUp: TopUp, decision: TopUpDecision): Promise<void> {
  switch (decision.kind) {
    case 'paid':
      return pay(topUp, decision.paymentIntentId);
    case 'processing':
      await topUp.update({ state: 'processing', problem: null });
      return;
    case 'failed':
      await topUp.update({ state: 'failed', problem: decision.problem, nextCheckAt: null });
      if (topUp.way === 'automatic') await stop(topUp, decision);
      return;
    case 'expired':
      await topUp.update({ state: 'expired', nextCheckAt: null });
      return;
    case 'pending':
      if (topUp.problem !== decision.problem) await topUp.update({ problem: decision.problem });
      return;
    case 'mismatch':
      await topUp.update({
        problem: 'The payment does not match this top-up. We are looking into it; no credits were issued.',
      });
  }
}

async function stop(attempt: TopUp, decision: { problem: string; needsHolder?: boolean }): Promise<void> {
  const team = await Team.findByPk(attempt.teamId, { rejectOnEmpty: true });
  const { problem, needsHolder = false } = decision;
  await stopAutomaticTopUp({ team, problem, needsHolder, attempt });
}

/** Credits, invoice and state in one transaction. */
async function pay(topUp: TopUp, paymentIntentId: string): Promise<void> {
  const paidAt = nowText();
  const { id, teamId, userId, creditsMicrocredits, netMinor, currency, tax, buyer } = topUp;
  await topUp.update({ state: 'paid', paidAt, paymentIntentId, problem: null, nextCheckAt: null, checkoutUrl: null });
  await issueBoughtCredits({
    teamId,
    creditsMicrocredits,
    netMinor,
    currency,
    purchaseId: id,
    userId,
    memo: { topUpId: id },
  });
  const face = composeFace({
    seller: seller(),
    buyer,
    credits: creditsMicrocredits / microcreditsPerCredit,
    creditsMicrocredits,
    netMinor,
    currency,
    tax,
    books: await readBooksRate(currency, paidAt),
  });
  await issueInvoice({ teamId, face, paidAt, topUpId: id });
  afterCommit(wakeBilling);
}
