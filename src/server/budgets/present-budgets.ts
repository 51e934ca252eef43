/** Budgets of a team with what the month has used of them. */
import { ProjectCodeBudget, TeamBudget } from '@db/models/finance.ts';
import type { Team } from '@db/models/people.ts';
import { ProjectCode } from '@db/models/teams.ts';
import type { BudgetsDocument } from '@/contracts/budgets.ts';
import { dayIn, monthIn, monthSpan } from '@/domain/billing/month-start.ts';
import { limits } from '@/domain/limits.ts';
import { nowMs } from '../clock.ts';
import { launchesSince, useOf, type LaunchUse } from './used-this-month.ts';

export async function presentBudgets({ id: teamId, timeZone }: Team): Promise<BudgetsDocument> {
  const month = monthIn(nowMs(), timeZone);
  const { fromMs, toMs } = monthSpan(month, timeZone);
  const [budget, launches, codes] = await Promise.all([
    TeamBudget.findByPk(teamId),
    launchesSince(teamId, new Date(fromMs).toISOString()),
    ProjectCode.findAll({ where: { teamId }, order: [['code', 'ASC']], limit: limits.projectCodesPerTeam }),
  ]);
  const ofCodes = await ProjectCodeBudget.findAll({ where: { projectCodeId: codes.map(({ id }) => id) } });
  return {
    month,
    timeZone,
    monthlyMicrocredits: budget?.monthlyMicrocredits ?? null,
    lowBalanceMicrocredits: budget?.lowBalanceMicrocredits ?? null,
    usedMicrocredits: useOf(launches),
    heldMicrocredits: launches.reduce((sum, { heldMicrocredits }) => sum + heldMicrocredits, 0),
    projectCodes: codes.map(({ id, code, client, closedAt }) => ({
      id,
      code,
      client,
      closed: closedAt !== null,
      monthlyMicrocredits: ofCodes.find(({ projectCodeId }) => projectCodeId === id)?.monthlyMicrocredits ?? null,
      usedMicrocredits: useOf(launches.filter(({ projectCodeId }) => projectCodeId === id)),
    })),
    days: byDay(launches, timeZone),
    // Rounded, since a month may be an hour longer or shorter by summer time.
    daysInMonth: Math.round((toMs - fromMs) / 86_400_000),
  };
}

function byDay(launches: readonly LaunchUse[], timeZone: string): BudgetsDocument['days'] {
  const days = new Map<string, number>();
  for (const launch of launches) {
    const day = dayIn(Date.parse(launch.occurredAt), timeZone);
    days.set(day, (days.get(day) ?? 0) + useOf([launch]));
  }
  return [...days].map(([day, usedMicrocredits]) => ({ day, usedMicrocredits }));
}
