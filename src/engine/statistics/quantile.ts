/**
 * Quantiles of type 1, the inverse of the empirical distribution: the least value that at least a share p of the replicates
 * does not exceed, and their order-statistic intervals.
 * Source: Hyndman & Fan, "Sample quantiles in statistical packages" (Am. Stat. 1996); David & Nagaraja, "Order Statistics" (2003).
 */
import { valueOfRank } from './count-cells.ts';
import { realBinRange } from './real-cells.ts';
import type { Summary } from './summary.ts';

export const standardProbabilities = ['0.05', '0.25', '0.5', '0.75', '0.95'] as const;

/** ⌈n · p⌉ without rounding error, at least 1; p is a decimal string between 0 and 1. */
export function rankOf(n: number, probability: string): number {
  const match = /^(0|1)(?:\.(\d+))?$/.exec(probability);
  if (!match || Number(probability) > 1) throw new RangeError(`not a probability: ${probability}`);
  const digits = match[2] ?? '';
  const denominator = 10n ** BigInt(digits.length);
  const product = BigInt(n) * BigInt(match[1]! + digits);
  return Math.max(1, Number((product + denominator - 1n) / denominator));
}

/** The value of a rank (1 = least), at the resolution of the histogram's bins (see bins.ts and real-cells.ts). */
export function orderStatistic(summary: Summary, observable: number, gridPoint: number, rank: number): number {
  const { kind, cell } = summary.cell(observable, gridPoint);
  if (kind === 'count') return valueOfRank(summary.counts, cell, rank);
  let seen = 0;
  for (const [bin, count] of summary.reals.bins(cell)) {
    seen += count;
    if (seen >= rank) return realBinRange(bin).edge;
  }
  throw new RangeError(`rank ${rank} of ${seen} values`);
}

/** NaN without a replicate. */
export const quantile = (summary: Summary, observable: number, gridPoint: number, probability: string): number =>
  summary.replicates === 0
    ? NaN
    : orderStatistic(summary, observable, gridPoint, rankOf(summary.replicates, probability));

export interface QuantileRanks {
  /** Rank of the lower end, 1 … n; null where n is too small for one: unbounded below. */
  lower: number | null;
  upper: number | null;
  /** P(X(lower) ≤ quantile ≤ X(upper)) for a continuous distribution; a little more for counts. */
  coverage: number;
}

/** Ranks of the equal-tailed order-statistic interval of the p-quantile: each tail of Binomial(n, p) at most (1 − level)/2. */
export function quantileRanks(n: number, p: number, level = 0.95): QuantileRanks {
  const tail = (1 - level) / 2;
  const masses = binomialMasses(n, p);
  let below = 0;
  let lower = masses.first;
  while (lower <= n && below + masses.at(lower) <= tail) below += masses.at(lower++);
  let above = 0;
  let upper = masses.last + 1;
  while (upper > 0 && above + masses.at(upper - 1) <= tail) above += masses.at(--upper);
  return { lower: lower < 1 ? null : lower, upper: upper > n ? null : upper, coverage: 1 - below - above };
}

/** Binomial(n, p) by recursion from its mode outward, normalised; masses below 10^-18 of the mode's are left out. */
function binomialMasses(n: number, p: number): { first: number; last: number; at(k: number): number } {
  const mode = Math.min(n, Math.floor((n + 1) * p));
  const upward = [1];
  const odds = p / (1 - p);
  for (let k = mode; k < n && upward.at(-1)! > 1e-18; k++) upward.push((upward.at(-1)! * (n - k) * odds) / (k + 1));
  const downward: number[] = [];
  for (let k = mode, mass = 1; k > 0 && mass > 1e-18; k--) {
    mass *= k / ((n - k + 1) * odds);
    downward.push(mass);
  }
  const all = [...downward.reverse(), ...upward];
  const first = mode - downward.length;
  const total = all.reduce((sum, mass) => sum + mass, 0);
  return { first, last: first + all.length - 1, at: (k) => (all[k - first] ?? 0) / total };
}

/** The interval of a quantile; −∞ or ∞ where too few replicates bound it. */
export function quantileInterval(
  summary: Summary,
  observable: number,
  gridPoint: number,
  probability: string,
  level = 0.95,
): { lower: number; upper: number; coverage: number } {
  const { lower, upper, coverage } = quantileRanks(summary.replicates, Number(probability), level);
  return {
    lower: lower === null ? -Infinity : orderStatistic(summary, observable, gridPoint, lower),
    upper: upper === null ? Infinity : orderStatistic(summary, observable, gridPoint, upper),
    coverage,
  };
}
