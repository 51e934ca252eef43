/** Sets budgets. Jobs that run keep their holds; the next launch meets the new limits. */
import { inWriteTransaction } from '@db/in-write-transaction.ts';
import { ProjectCodeBudget, TeamBudget } from '@db/models/finance.ts';
import { ProjectCode } from '@db/models/teams.ts';
import type { BudgetsDocument } from '@/contracts/budgets.ts';
import { accept, refuse, type Result } from '@/domain/refusals.ts';
import type { Actor } from '@/domain/teams/actor.ts';
import { nowText } from '../clock.ts';
import { authorise } from '../teams/authorise.ts';
import { presentBudgets } from './present-budgets.ts';

export async function setBudgets(options: {
  actor: Actor;
  team: string;
  monthlyMicrocredits: number | null;
  lowBalanceMicrocredits: number | null;
  projectCodes: { id: string; monthlyMicrocredits: number | null }[];
}): Promise<Result<{ budgets: BudgetsDocument }>> {
  const { actor, projectCodes, monthlyMicrocredits, lowBalanceMicrocredits } = options;
  const authorised = await authorise({ actor, team: options.team, permission: 'billing:write' });
  if (!authorised.ok) return authorised;
  const { team, userId } = authorised.value;
  return inWriteTransaction(async () => {
    const written = { updatedAt: nowText(), updatedBy: userId };
    await TeamBudget.upsert({ teamId: team.id, monthlyMicrocredits, lowBalanceMicrocredits, ...written });
    for (const [index, code] of projectCodes.entries()) {
      if (!(await ProjectCode.findOne({ where: { id: code.id, teamId: team.id }, attributes: ['id'] }))) {
        const message = 'There is no such project code in this team.';
        return refuse('invalid_input', message, {
          errors: [{ path: `projectCodes.${index}.id`, code: 'not_found', message }],
        });
      }
      await ProjectCodeBudget.upsert({
        projectCodeId: code.id,
        monthlyMicrocredits: code.monthlyMicrocredits,
        ...written,
      });
    }
    return accept({ budgets: await presentBudgets(team) });
  });
}
