/** Monthly budgets of the team and of its project codes, and alerts. All amounts are integer microcredits. */
import { z } from 'zod';
import { limits } from '@/domain/limits.ts';
import { contract } from './contract.ts';

const refusals = ['not_signed_in', 'not_found', 'forbidden'] as const;
const microcredits = z.number().int();
const amount = z.number().int().positive('An amount is above 0.').max(limits.integer).nullable();

export const projectCodeUse = z.object({
  id: z.string(),
  code: z.string(),
  client: z.string().nullable(),
  closed: z.boolean(),
  monthlyMicrocredits: microcredits.nullable(),
  /** Spent and held by jobs launched this month. */
  usedMicrocredits: microcredits,
});
export type ProjectCodeUse = z.infer<typeof projectCodeUse>;

export const budgets = z.object({
  month: z.string(),
  timeZone: z.string(),
  /** Null: no limit. */
  monthlyMicrocredits: microcredits.nullable(),
  /** Null: no mail. */
  lowBalanceMicrocredits: microcredits.nullable(),
  /** Spent and held by jobs launched this month: what the budget counts. */
  usedMicrocredits: microcredits,
  heldMicrocredits: microcredits,
  projectCodes: z.array(projectCodeUse),
  /** Of jobs launched this month, by the day of the launch; days without any are left out. */
  days: z.array(z.object({ day: z.string(), usedMicrocredits: microcredits })),
  daysInMonth: z.number().int(),
});
export type BudgetsDocument = z.infer<typeof budgets>;

export const readBudgets = contract({
  id: 'readBudgets',
  feature: 'billing',
  method: 'GET',
  path: '/api/v1/teams/{team}/budgets',
  summary: 'Budgets of the month and what has been used of them',
  access: { kind: 'team', permission: 'billing:read' },
  answers: [{ status: 200, description: 'Budgets', schema: z.object({ budgets }) }],
  refusals: [...refusals],
});

export const setBudgets = contract({
  id: 'setBudgets',
  feature: 'billing',
  method: 'PUT',
  path: '/api/v1/teams/{team}/budgets',
  summary: 'Set the monthly budget of the team, the low balance that is told by mail, and budgets of project codes',
  access: { kind: 'team', permission: 'billing:write' },
  body: z.strictObject({
    monthlyMicrocredits: amount,
    lowBalanceMicrocredits: amount,
    /** Codes that are not named keep what they have. */
    projectCodes: z
      .array(z.strictObject({ id: z.string().max(100), monthlyMicrocredits: amount }))
      .max(limits.projectCodesPerTeam)
      .default([]),
  }),
  answers: [{ status: 200, description: 'Stored', schema: z.object({ budgets }) }],
  refusals: [...refusals, 'team_suspended', 'invalid_input'],
});

export const budgetContracts = [readBudgets, setBudgets];
