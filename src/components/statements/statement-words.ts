/** The figures of a statement in words, in the order in which they add up. */
import type { StatementFigures } from '@/contracts/statements.ts';

export interface StatementRow {
  key: keyof StatementFigures;
  words: string;
  /** −1 where the figure leaves the balance. */
  sign: 1 | -1;
  /** Shown also when it is zero. */
  always: boolean;
}

export const statementRows: StatementRow[] = [
  { key: 'openingMicrocredits', words: 'Opening balance', sign: 1, always: true },
  { key: 'boughtMicrocredits', words: 'Bought', sign: 1, always: true },
  { key: 'grantedMicrocredits', words: 'Granted', sign: 1, always: true },
  { key: 'earnedMicrocredits', words: 'Earned', sign: 1, always: false },
  { key: 'spentMicrocredits', words: 'Spent', sign: -1, always: true },
  { key: 'refundedMicrocredits', words: 'Refunded', sign: -1, always: false },
  { key: 'takenBackMicrocredits', words: 'Taken back after a dispute', sign: -1, always: false },
  { key: 'closingMicrocredits', words: 'Closing balance', sign: 1, always: true },
];

/** "December 2026". */
export const monthText = (month: string): string =>
  new Date(`${month}-15T12:00:00Z`).toLocaleDateString('en-GB', { month: 'long', year: 'numeric', timeZone: 'UTC' });
