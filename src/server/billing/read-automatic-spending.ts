/** What automatic top-ups have charged, or are charging, in the present month of the team's time zone. */
import { Op } from 'sequelize';
import { TopUp } from '@db/models/billing.ts';
import type { Team } from '@db/models/people.ts';
import { monthIn, monthStartMs } from '@/domain/billing/month-start.ts';
import { nowMs } from '../clock.ts';

/** Minor units of `currency`, tax included; what did not pass does not count. */
export async function readAutomaticSpending(options: {
  team: Team;
  currency: string;
}): Promise<{ month: string; spentMinor: number }> {
  const { team, currency } = options;
  const now = nowMs();
  const startedAt = new Date(monthStartMs(now, team.timeZone)).toISOString();
  const rows = await TopUp.findAll({
    where: {
      teamId: team.id,
      way: 'automatic',
      currency,
      state: ['pending', 'processing', 'paid'],
      createdAt: { [Op.gte]: startedAt },
    },
    attributes: ['totalMinor'],
  });
  return {
    month: monthIn(now, team.timeZone),
    spentMinor: rows.reduce((sum, { totalMinor }) => sum + totalMinor, 0),
  };
}
