/** Revenue as it is earned: the net money of lots as their credits are spent, month by month, adding up exactly. */
import { moneyOfDrawn } from '../ledger/lots.ts';

/** What was spent of a lot in a month. */
export interface LotMonth {
  lotId: string;
  /** `2026-12`. */
  month: string;
  drawnMicrocredits: number;
  netMinor: number;
  currency: string;
  creditsMicrocredits: number;
}

export interface MonthMoney {
  month: string;
  currency: string;
  amountMinor: number;
}

/**
 * Of each lot floor(netMinor × drawn / credits) on the running total; a month earns the difference to the month before.
 * `rows` come lot by lot, months rising. Answers one sum per month and currency, months rising.
 */
export function earnedByMonth(rows: readonly LotMonth[]): MonthMoney[] {
  const sums = new Map<string, MonthMoney>();
  let lotId: string | null = null;
  let drawn = 0;
  for (const row of rows) {
    if (row.lotId !== lotId) drawn = 0;
    lotId = row.lotId;
    const before = moneyOfDrawn({ ...row, drawnMicrocredits: drawn });
    drawn += row.drawnMicrocredits;
    const { month, currency } = row;
    const key = `${month} ${currency}`;
    const sum = sums.get(key) ?? { month, currency, amountMinor: 0 };
    sum.amountMinor += moneyOfDrawn({ ...row, drawnMicrocredits: drawn }) - before;
    sums.set(key, sum);
  }
  return [...sums].sort(([one], [other]) => (one < other ? -1 : 1)).map(([, sum]) => sum);
}

/** One sum per currency: amounts of different currencies are never added. */
export function sumMoney(
  amounts: readonly { currency: string; amountMinor: number }[],
): { currency: string; amountMinor: number }[] {
  const sums = new Map<string, number>();
  for (const { currency, amountMinor } of amounts) sums.set(currency, (sums.get(currency) ?? 0) + amountMinor);
  return [...sums]
    .sort(([one], [other]) => (one < other ? -1 : 1))
    .map(([currency, amountMinor]) => ({ currency, amountMinor }));
}
