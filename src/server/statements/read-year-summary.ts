/** The statements of a calendar year side by side. */
import type { StatementFigures, YearSummary } from '@/contracts/statements.ts';
import { monthIn, monthSpan, yearIn } from '@/domain/billing/month-start.ts';
import { accept, refuse, type Result } from '@/domain/refusals.ts';
import type { Actor } from '@/domain/teams/actor.ts';
import { nowMs } from '../clock.ts';
import { authorise } from '../teams/authorise.ts';
import { cutAt } from './balances-at.ts';
import { figuresBetween } from './figures-between.ts';
import { spentBySegment } from './spent-by-segment.ts';
import { byProjectCode, sumSpending } from './sum-spending.ts';

export async function readYearSummary(options: {
  actor: Actor;
  team: string;
  year?: number | undefined;
}): Promise<Result<{ summary: YearSummary }>> {
  const authorised = await authorise({ ...options, permission: 'billing:read' });
  if (!authorised.ok) return authorised;
  const { id: teamId, timeZone } = authorised.value.team;
  const present = yearIn(nowMs(), timeZone);
  const year = options.year ?? present;
  if (year > present)
    return refuse('invalid_input', `${year} has not begun. The newest summary is that of ${present}.`);
  const presentMonth = monthIn(nowMs(), timeZone);
  const names = [...Array(12).keys()]
    .map((index) => `${year}-${String(index + 1).padStart(2, '0')}`)
    .filter((month) => month <= presentMonth);
  const cuts = [await cutAt(teamId, startOf(names[0]!, timeZone))];
  const months: YearSummary['months'] = [];
  for (const month of names) {
    const cut = await cutAt(teamId, new Date(monthSpan(month, timeZone).toMs).toISOString());
    months.push({ month, ...(await figuresBetween(teamId, cuts.at(-1)!, cut)) });
    cuts.push(cut);
  }
  const range = { from: cuts[0]!.sequence, to: cuts.at(-1)!.sequence };
  const total: StatementFigures = await figuresBetween(teamId, cuts[0]!, cuts.at(-1)!);
  const codes = sumSpending(await spentBySegment(teamId, range), byProjectCode);
  return accept({ summary: { year, timeZone, months, total, byProjectCode: codes } });
}

const startOf = (month: string, timeZone: string): string => new Date(monthSpan(month, timeZone).fromMs).toISOString();
