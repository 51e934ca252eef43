/** Mails to owners and finance admins: half, most and all of a budget used, and little left. Each once a month. */
import { Op } from 'sequelize';
import { inWriteTransaction } from '@db/in-write-transaction.ts';
import { BudgetAlert, ProjectCodeBudget, TeamBudget } from '@db/models/finance.ts';
import { Team } from '@db/models/people.ts';
import { ProjectCode } from '@db/models/teams.ts';
import type { BudgetsDocument } from '@/contracts/budgets.ts';
import { alertsDue, type DueAlert } from '@/domain/billing/alerts-due.ts';
import { creditsText } from '@/domain/pricing/credits-text.ts';
import { paths } from '@/paths.ts';
import { financePeople } from '../billing/add-invoice-message.ts';
import { nowText } from '../clock.ts';
import { env } from '../env.ts';
import { readBalance } from '../ledger/read-balance.ts';
import { composeLetter, type ComposedLetter } from '../mail/compose-letter.ts';
import { queueMail } from '../mail/queue-mail.ts';
import { queueWebhook } from '../webhooks/queue-webhook.ts';
import { presentBudgets } from './present-budgets.ts';

/** Looks at every team that has a budget or a low balance set; answers how many alerts went out. */
export async function sendBudgetAlerts(): Promise<number> {
  let count = 0;
  for (const teamId of await teamsWithBudgets()) count += await alertTeam(teamId);
  return count;
}

async function teamsWithBudgets(): Promise<string[]> {
  const set = { [Op.ne]: null };
  const teams = await TeamBudget.findAll({
    where: { [Op.or]: [{ monthlyMicrocredits: set }, { lowBalanceMicrocredits: set }] },
  });
  const ofCodes = await ProjectCodeBudget.findAll({ where: { monthlyMicrocredits: set } });
  const codes = await ProjectCode.findAll({ where: { id: ofCodes.map(({ projectCodeId }) => projectCodeId) } });
  return [...new Set([...teams, ...codes].map(({ teamId }) => teamId))];
}

async function alertTeam(teamId: string): Promise<number> {
  const team = await Team.findByPk(teamId, { rejectOnEmpty: true });
  const budgets = await presentBudgets(team);
  const { available } = await readBalance(teamId);
  const sent = await BudgetAlert.findAll({ where: { teamId, month: budgets.month }, attributes: ['alert'] });
  const due = alertsDue({ ...budgets, availableMicrocredits: available }, new Set(sent.map(({ alert }) => alert)));
  if (due.length === 0) return 0;
  const people = await financePeople(teamId);
  await inWriteTransaction(async () => {
    for (const alert of due) {
      const { ids } = alert;
      for (const id of ids) await BudgetAlert.create({ teamId, month: budgets.month, alert: id, at: nowText() });
      if (alert.kind === 'low_balance')
        await queueWebhook({
          teamId,
          kind: 'balance_low',
          occasion: `alert:${budgets.month}:${ids.at(-1)}`,
          data: { availableMicrocredits: alert.availableMicrocredits, limitMicrocredits: alert.limitMicrocredits },
        });
      const letter = letterOf(alert, team, budgets);
      for (const { email } of people)
        await queueMail({
          ...letter,
          to: email,
          messageKey: `alert:${teamId}:${budgets.month}:${ids.at(-1)}:${email}`,
        });
    }
  });
  return due.length;
}

function letterOf(alert: DueAlert, team: Team, { month }: BudgetsDocument): ComposedLetter {
  if (alert.kind === 'low_balance')
    return composeLetter({
      subject: `${team.name}: ${creditsText(alert.availableMicrocredits)} left`,
      paragraphs: [
        `${team.name} has ${creditsText(alert.availableMicrocredits)} available, less than the ${creditsText(alert.limitMicrocredits)} at which you wanted to be told.`,
        'Jobs that run are not touched: what they may spend is held already.',
      ],
      action: { label: 'Buy credits', url: `${env().PUBLIC_URL}${paths.credits(team.slug)}` },
      closing: ['This mail is sent once a month at most.'],
    });
  const budget = alert.code ? `the budget of project code ${alert.code}` : `the budget of ${team.name}`;
  return composeLetter({
    subject: `${alert.percent} % of ${budget} used`,
    paragraphs: [
      `Of ${budget} for ${month}, ${creditsText(alert.limitMicrocredits)}, jobs launched this month have spent or hold ${creditsText(alert.usedMicrocredits)}.`,
      alert.percent === 100
        ? 'Jobs that run go on under their caps. No further job starts this month unless the budget is raised.'
        : 'A launch that would go beyond the budget is refused before it starts.',
    ],
    action: { label: 'See the budget', url: `${env().PUBLIC_URL}${paths.budget(team.slug)}` },
  });
}
