/** Budgets of a team and what the month has used of them. */
import type { BudgetsDocument } from '@/contracts/budgets.ts';
import { accept, type Result } from '@/domain/refusals.ts';
import type { Actor } from '@/domain/teams/actor.ts';
import { authorise } from '../teams/authorise.ts';
import { presentBudgets } from './present-budgets.ts';

export async function readBudgets(options: {
  actor: Actor;
  team: string;
}): Promise<Result<{ budgets: BudgetsDocument }>> {
  const authorised = await authorise({ ...options, permission: 'billing:read' });
  return authorised.ok ? accept({ budgets: await presentBudgets(authorised.value.team) }) : authorised;
}
