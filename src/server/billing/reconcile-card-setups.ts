/** Heals what webhooks did not bring: asks about visits for saving a card that stay open. */
import { Op } from 'sequelize';
import { inWriteTransaction } from '@db/in-write-transaction.ts';
import { CardSetup } from '@db/models/cards.ts';
import { nowText } from '../clock.ts';
import { refreshCardSetup } from './refresh-card-setup.ts';

const firstWaitMs = 60_000;
const longestWaitMs = 60 * 60 * 1000;

/** `due` (the default) asks about those whose time has come, with growing pauses; `all` about every open one. */
export async function reconcileCardSetups(options: { which?: 'due' | 'all' } = {}): Promise<number> {
  const open = await CardSetup.findAll({
    where: { state: 'pending', ...(options.which === 'all' ? {} : { nextCheckAt: { [Op.lte]: nowText() } }) },
    order: [['nextCheckAt', 'ASC']],
    limit: 50,
  });
  for (const { id, checks } of open) {
    await refreshCardSetup(id);
    const wait = Math.min(longestWaitMs, firstWaitMs * 2 ** Math.min(checks, 20));
    await inWriteTransaction(() =>
      CardSetup.update({ checks: checks + 1, nextCheckAt: nowText(wait) }, { where: { id, state: 'pending' } }),
    );
  }
  return open.length;
}
