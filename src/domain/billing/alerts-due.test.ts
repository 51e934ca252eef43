import { describe, expect, it } from 'vitest';
import { alertsDue, type BudgetState } from './alerts-due.ts';

const state = (more: Partial<BudgetState>): BudgetState => ({
  monthlyMicrocredits: null,
  lowBalanceMicrocredits: null,
  usedMicrocredits: 0,
  availableMicrocredits: 0,
  projectCodes: [],
  ...more,
});
const ids = (more: Partial<BudgetState>, sent: string[] = []) =>
  alertsDue(state(more), new Set(sent)).flatMap((alert) => alert.ids);

describe('alertsDue', () => {
  it('tells of half, 80 % and all of a budget, to the microcredit', () => {
    const monthlyMicrocredits = 1_000_001;
    const at = (usedMicrocredits: number) => ids({ monthlyMicrocredits, usedMicrocredits });
    expect(at(500_000)).toEqual([]);
    expect(at(500_001)).toEqual(['budget:50']);
    expect(at(800_000)).toEqual(['budget:50']);
    expect(at(800_001)).toEqual(['budget:50', 'budget:80']);
    expect(at(1_000_000)).toEqual(['budget:50', 'budget:80']);
    expect(at(1_000_001)).toEqual(['budget:50', 'budget:80', 'budget:100']);
  });

  it('tells one thing at a time: several steps at once are one mail about the highest', () => {
    const due = alertsDue(state({ monthlyMicrocredits: 100, usedMicrocredits: 90 }), new Set());
    expect(due).toHaveLength(1);
    expect(due[0]).toMatchObject({ percent: 80 });
  });

  it('repeats nothing, also when what is used has fallen since', () => {
    const budget = { monthlyMicrocredits: 100, usedMicrocredits: 60 };
    expect(ids(budget, ['budget:50'])).toEqual([]);
    expect(ids(budget, ['budget:50', 'budget:80'])).toEqual([]);
    expect(ids({ ...budget, usedMicrocredits: 80 }, ['budget:50'])).toEqual(['budget:80']);
  });

  it('knows project codes apart, and tells of a low balance once', () => {
    const code = { id: 'p1', code: 'N-1', monthlyMicrocredits: 10, usedMicrocredits: 10 };
    expect(ids({ projectCodes: [code] })).toEqual(['budget:50:p1', 'budget:80:p1', 'budget:100:p1']);
    expect(ids({ lowBalanceMicrocredits: 5, availableMicrocredits: 5 })).toEqual([]);
    expect(ids({ lowBalanceMicrocredits: 5, availableMicrocredits: 4 })).toEqual(['low_balance']);
    expect(ids({ lowBalanceMicrocredits: 5, availableMicrocredits: 4 }, ['low_balance'])).toEqual([]);
  });
});
