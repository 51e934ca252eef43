/** Asks the payment service how a visit for saving a card stands, and keeps what may be shown of the card. */
import { inWriteTransaction } from '@db/in-write-transaction.ts';
import { CardSetup, SavedCard } from '@db/models/cards.ts';
import { decideCardSetup, type SetupDecision } from '@/domain/billing/decide-card-setup.ts';
import { accept, refuse, type Result } from '@/domain/refusals.ts';
import { nowText } from '../clock.ts';
import { log } from '../log.ts';
import { discardCard } from './discard-card.ts';
import { fetchSetup } from './payment-cards.ts';

/** Safe to call any number of times and in any order: of two visits that each saved a card, the later begun one stands. */
export async function refreshCardSetup(setupId: string): Promise<Result<SetupDecision['kind']>> {
  const setup = await CardSetup.findByPk(setupId);
  if (!setup) return refuse('not_found', 'There is no such visit.');
  if (setup.state === 'saved') return accept('saved');
  if (!setup.sessionId) return giveUpUnopened(setup);
  const fetched = await fetchSetup(setup.sessionId);
  if (!fetched.ok) return fetched;
  const decision = decideCardSetup(setup, fetched.value);
  if (decision.kind === 'mismatch')
    log().error({ setupId, fields: decision.fields }, 'the payment service answers another visit than the stored one');
  await inWriteTransaction(async () => {
    await setup.reload();
    if (setup.state === 'saved') return;
    if (decision.kind === 'expired')
      await setup.update({ state: 'expired', decidedAt: nowText(), nextCheckAt: null, pageUrl: null });
    if (decision.kind === 'saved') await keep(setup, decision.card);
  });
  return accept(decision.kind);
}

async function giveUpUnopened(setup: CardSetup): Promise<Result<SetupDecision['kind']>> {
  if (setup.expiresAt > nowText()) return accept('pending');
  await inWriteTransaction(() => setup.update({ state: 'expired', decidedAt: nowText(), nextCheckAt: null }));
  return accept('expired');
}

async function keep(setup: CardSetup, card: Extract<SetupDecision, { kind: 'saved' }>['card']): Promise<void> {
  const { id: setupId, teamId, userId } = setup;
  const savedAt = nowText();
  const present = await SavedCard.findOne({ where: { teamId, removedAt: null } });
  const { paymentMethodId, brand, lastFour, expiryMonth, expiryYear } = card;
  await setup.update({ state: 'saved', decidedAt: savedAt, nextCheckAt: null, pageUrl: null });
  const later = !present || setupId > present.setupId;
  if (later && present) await discardCard(present);
  const kept = await SavedCard.create({
    paymentMethodId,
    teamId,
    setupId,
    brand,
    lastFour,
    expiryMonth,
    expiryYear,
    savedAt,
    savedBy: userId,
    // Born removed when a later visit has saved its card already.
    ...(later ? {} : { removedAt: savedAt, forgetKey: `forget:${paymentMethodId}` }),
  });
  if (!later) await discardCard(kept);
}
