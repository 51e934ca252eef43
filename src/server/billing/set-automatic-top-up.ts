/** Sets up automatic top-up and switches it on or off. Switching on again forgives what stopped it. */
import { afterCommit, inWriteTransaction } from '@db/in-write-transaction.ts';
import { AutomaticTopUp, SavedCard } from '@db/models/cards.ts';
import type { AutomaticTopUpDocument } from '@/contracts/automatic-top-up.ts';
import { moneyText } from '@/domain/billing/money-text.ts';
import type { Currency } from '@/domain/pricing/price-book.ts';
import { accept, refuse, type Result } from '@/domain/refusals.ts';
import type { Actor } from '@/domain/teams/actor.ts';
import { nowText } from '../clock.ts';
import { authorise } from '../teams/authorise.ts';
import { presentAutomaticTopUp } from './present-automatic-top-up.ts';
import { pricePurchase } from './price-purchase.ts';
import { wakeAutomaticTopUps } from './wake-automatic-top-ups.ts';

export async function setAutomaticTopUp(options: {
  actor: Actor;
  team: string;
  on: boolean;
  thresholdMicrocredits: number;
  pack: string;
  currency: Currency;
  /** Tax included, minor units. */
  monthlyCeilingMinor: number;
}): Promise<Result<{ automaticTopUp: AutomaticTopUpDocument }>> {
  const { actor, on, thresholdMicrocredits, pack, currency, monthlyCeilingMinor } = options;
  const authorised = await authorise({ actor, team: options.team, permission: 'billing:write' });
  if (!authorised.ok) return authorised;
  const { team, userId } = authorised.value;
  const stored = await inWriteTransaction(async (): Promise<Result<true>> => {
    const priced = await pricePurchase({ team, pack, currency });
    if (!priced.ok) return priced;
    const { totalMinor } = priced.value;
    if (monthlyCeilingMinor < totalMinor) {
      const message = `One top-up costs ${moneyText(totalMinor, currency)} with tax. The ceiling must leave room for it.`;
      return refuse('invalid_input', message, {
        errors: [{ path: 'monthlyCeilingMinor', code: 'below_one_top_up', message }],
      });
    }
    if (on && !(await SavedCard.findOne({ where: { teamId: team.id, removedAt: null } })))
      return refuse('card_missing', 'No card is saved. Save one, then switch automatic top-up on.');
    await AutomaticTopUp.upsert({
      teamId: team.id,
      state: on ? 'on' : 'off',
      thresholdMicrocredits,
      pack,
      currency,
      monthlyCeilingMinor,
      problem: null,
      ceilingToldMonth: null,
      updatedAt: nowText(),
      updatedBy: userId,
    });
    afterCommit(wakeAutomaticTopUps);
    return accept(true);
  });
  return stored.ok ? accept({ automaticTopUp: await presentAutomaticTopUp(team) }) : stored;
}
