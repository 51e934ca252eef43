/** Which alerts about budgets and balance are due and have not gone out this month. */

export const alertPercents = [50, 80, 100] as const;

export interface BudgetState {
  monthlyMicrocredits: number | null;
  lowBalanceMicrocredits: number | null;
  usedMicrocredits: number;
  availableMicrocredits: number;
  projectCodes: readonly { id: string; code: string; monthlyMicrocredits: number | null; usedMicrocredits: number }[];
}

export type DueAlert =
  | { kind: 'low_balance'; ids: string[]; availableMicrocredits: number; limitMicrocredits: number }
  | {
      kind: 'budget';
      /** Every step passed since the last mail: one mail tells of the highest. */
      ids: string[];
      percent: (typeof alertPercents)[number];
      /** Null: the team's own budget. */
      code: string | null;
      usedMicrocredits: number;
      limitMicrocredits: number;
    };

/** `sent` holds the ids of this month's alerts. Integers are compared without dividing. */
export function alertsDue(state: BudgetState, sent: ReadonlySet<string>): DueAlert[] {
  const due: DueAlert[] = [];
  const { monthlyMicrocredits, usedMicrocredits, lowBalanceMicrocredits, availableMicrocredits } = state;
  const budgets = [
    { suffix: '', code: null, monthlyMicrocredits, usedMicrocredits },
    ...state.projectCodes.map(({ id, ...code }) => ({ suffix: `:${id}`, ...code })),
  ];
  for (const { suffix, code, monthlyMicrocredits: limit, usedMicrocredits: used } of budgets) {
    if (limit === null) continue;
    const passed = alertPercents.filter((percent) => BigInt(used) * 100n >= BigInt(limit) * BigInt(percent));
    const ids = passed.map((percent) => `budget:${percent}${suffix}`).filter((id) => !sent.has(id));
    const percent = passed.at(-1);
    if (percent !== undefined && !sent.has(`budget:${percent}${suffix}`))
      due.push({ kind: 'budget', ids, percent, code, usedMicrocredits: used, limitMicrocredits: limit });
  }
  if (lowBalanceMicrocredits !== null && availableMicrocredits < lowBalanceMicrocredits && !sent.has('low_balance'))
    due.push({
      kind: 'low_balance',
      ids: ['low_balance'],
      availableMicrocredits,
      limitMicrocredits: lowBalanceMicrocredits,
    });
  return due;
}
