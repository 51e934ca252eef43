/** Automatic top-up of a team as the API shows it. */
import { TopUp } from '@db/models/billing.ts';
import { AutomaticTopUp } from '@db/models/cards.ts';
import type { Team } from '@db/models/people.ts';
import type { AutomaticTopUpDocument } from '@/contracts/automatic-top-up.ts';
import type { Currency } from '@/domain/pricing/price-book.ts';
import { readBalance } from '../ledger/read-balance.ts';
import { describeTopUps } from './describe-top-up.ts';
import { presentCard } from './present-card.ts';
import { pricePurchase } from './price-purchase.ts';
import { readAutomaticSpending } from './read-automatic-spending.ts';

const shownAttempts = 10;

export async function presentAutomaticTopUp(team: Team): Promise<AutomaticTopUpDocument> {
  const row = await AutomaticTopUp.findByPk(team.id);
  const currency = (row?.currency ?? 'EUR') as Currency;
  const priced = row ? await pricePurchase({ team, pack: row.pack, currency }) : null;
  const { month, spentMinor } = await readAutomaticSpending({ team, currency });
  const { available } = await readBalance(team.id);
  const attempts = await TopUp.findAll({
    where: { teamId: team.id, way: 'automatic' },
    order: [['id', 'DESC']],
    limit: shownAttempts,
  });
  const money = (amountMinor: number) => ({ amountMinor, currency });
  const nextMinor = priced?.ok ? priced.value.totalMinor : null;
  return {
    state: row?.state ?? 'unset',
    problem: row?.problem ?? null,
    settings: row && {
      thresholdMicrocredits: row.thresholdMicrocredits,
      pack: row.pack,
      monthlyCeiling: money(row.monthlyCeilingMinor),
    },
    nextTotal: nextMinor === null ? null : money(nextMinor),
    month,
    timeZone: team.timeZone,
    spentThisMonth: row && money(spentMinor),
    ceilingReached: row !== null && nextMinor !== null && spentMinor + nextMinor > row.monthlyCeilingMinor,
    availableMicrocredits: available,
    ...(await presentCard(team.id)),
    attempts: await describeTopUps(attempts),
  };
}
