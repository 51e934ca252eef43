/** Takes a saved card out of use; the payment service is told after the commit, again and again until it has answered. */
import { Op } from 'sequelize';
import { afterCommit, inWriteTransaction } from '@db/in-write-transaction.ts';
import { SavedCard } from '@db/models/cards.ts';
import { nowText } from '../clock.ts';
import { log } from '../log.ts';
import { forgetCard } from './payment-cards.ts';
import { wakeBilling } from './wake-billing.ts';

/** Joins the caller's write transaction. */
export async function discardCard(card: SavedCard): Promise<void> {
  if (!card.removedAt) await card.update({ removedAt: nowText(), forgetKey: `forget:${card.paymentMethodId}` });
  afterCommit(wakeBilling);
}

/** A round of the billing part: cards that the service has not let go of yet. Answers how many it was told about. */
export async function forgetCards(): Promise<number> {
  const open = await SavedCard.findAll({ where: { removedAt: { [Op.ne]: null }, forgottenAt: null }, limit: 50 });
  for (const { paymentMethodId, forgetKey } of open) {
    try {
      const told = await forgetCard({ paymentMethodId, idempotencyKey: forgetKey! });
      if (!told.ok) continue;
      await inWriteTransaction(() => SavedCard.update({ forgottenAt: nowText() }, { where: { paymentMethodId } }));
    } catch (error) {
      log().error({ err: error }, 'a removed card could not be forgotten');
    }
  }
  return open.length;
}
