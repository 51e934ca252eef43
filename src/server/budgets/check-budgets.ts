/** Whether a launch fits the budgets of its month. Decided inside the transaction that places its hold. */
import { ProjectCodeBudget, TeamBudget } from '@db/models/finance.ts';
import { Team } from '@db/models/people.ts';
import { ProjectCode } from '@db/models/teams.ts';
import { monthStartMs } from '@/domain/billing/month-start.ts';
import { creditsText } from '@/domain/pricing/credits-text.ts';
import { accept, refuse, type Result } from '@/domain/refusals.ts';
import { nowMs } from '../clock.ts';
import { launchesSince, useOf } from './used-this-month.ts';

/** `capMicrocredits` is what the launch would hold. A budget counts what the month's launches have spent and hold. */
export async function checkBudgets(options: {
  teamId: string;
  projectCodeId: string | null;
  capMicrocredits: number;
}): Promise<Result<null>> {
  const { teamId, projectCodeId, capMicrocredits } = options;
  const ofTeam = (await TeamBudget.findByPk(teamId))?.monthlyMicrocredits ?? null;
  const ofCode = projectCodeId
    ? ((await ProjectCodeBudget.findByPk(projectCodeId))?.monthlyMicrocredits ?? null)
    : null;
  if (ofTeam === null && ofCode === null) return accept(null);
  const { timeZone } = (await Team.findByPk(teamId, { attributes: ['timeZone'], rejectOnEmpty: true }))!;
  const launches = await launchesSince(teamId, new Date(monthStartMs(nowMs(), timeZone)).toISOString());
  const left = ofTeam === null ? null : ofTeam - useOf(launches);
  if (left !== null && capMicrocredits > left)
    return beyond('the team’s monthly budget', ofTeam!, left, capMicrocredits);
  if (ofCode === null) return accept(null);
  const leftOfCode = ofCode - useOf(launches.filter((launch) => launch.projectCodeId === projectCodeId));
  if (capMicrocredits <= leftOfCode) return accept(null);
  const { code } = (await ProjectCode.findByPk(projectCodeId!))!;
  return beyond(`the monthly budget of project code ${code}`, ofCode, leftOfCode, capMicrocredits);
}

const beyond = (budget: string, size: number, left: number, wanted: number) =>
  refuse(
    'budget_exceeded',
    `This would hold ${creditsText(wanted)}; of ${budget} of ${creditsText(size)}, ${creditsText(Math.max(0, left))} are neither spent nor held. ` +
      'Nothing was started. Lower the cap, or ask an owner or finance admin to raise the budget.',
  );
