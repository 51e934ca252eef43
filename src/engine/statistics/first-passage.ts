/**
 * Estimates from times of first passage, with their errors. A replicate that has not passed by the horizon counts as just that,
 * whatever became of it: one that was absorbed earlier can never pass, so it is not censored at its absorption.
 *
 * Sources: Wilson 1927 (wilson.ts) for probabilities; David & Nagaraja, "Order Statistics" (2003) for quantiles (quantile.ts);
 * restricted mean E min(T, horizon): Irwin, "The standard error of an estimate of expectation of life" (J. Hyg. 1949), here
 * without censoring a plain mean of min(T, horizon).
 */
import { rankOf, quantileRanks, standardProbabilities } from './quantile.ts';
import { wilsonInterval } from './wilson.ts';

export interface PassageEstimates {
  replicates: number;
  /** Replicates that passed by the horizon. */
  passed: number;
  /** P(T ≤ horizon), with the 95 % score interval. */
  probability: { value: number; lower: number; upper: number };
  /** E min(T, horizon); the error is NaN below two replicates. */
  restrictedMean: { value: number; standardError: number };
  /** E T, only where every replicate passed. */
  mean: { value: number; standardError: number } | null;
  /** Type 1, with 95 % order-statistic intervals; Infinity: not reached by the horizon, or not bounded by so few replicates. */
  quantiles: Record<string, { value: number; lower: number; upper: number }>;
}

/** `times` in order of replicates, Infinity where not passed; at least one. */
export function passageEstimates(times: Float64Array, horizon: number): PassageEstimates {
  const n = times.length;
  const sorted = times.slice().sort();
  const passed = passedBy(sorted, horizon);
  const quantiles: PassageEstimates['quantiles'] = {};
  for (const probability of standardProbabilities) {
    const { lower, upper } = quantileRanks(n, Number(probability));
    quantiles[probability] = {
      value: sorted[rankOf(n, probability) - 1]!,
      lower: lower === null ? 0 : sorted[lower - 1]!,
      upper: upper === null ? Infinity : sorted[upper - 1]!,
    };
  }
  return {
    replicates: n,
    passed,
    probability: { value: passed / n, ...wilsonInterval(passed, n) },
    restrictedMean: meanOf(times.map((time) => Math.min(time, horizon))),
    mean: passed === n ? meanOf(times) : null,
    quantiles,
  };
}

/** P(T ≤ t) at each of `at`, with 95 % score intervals. */
export function passageCurve(
  times: Float64Array,
  at: ArrayLike<number>,
): { probability: number[]; lower: number[]; upper: number[] } {
  const sorted = times.slice().sort();
  const counts = Array.from(at, (time) => passedBy(sorted, time));
  const intervals = counts.map((count) => wilsonInterval(count, times.length));
  return {
    probability: counts.map((count) => count / times.length),
    lower: intervals.map(({ lower }) => lower),
    upper: intervals.map(({ upper }) => upper),
  };
}

/** How many of the sorted times are at most `time`. */
function passedBy(sorted: Float64Array, time: number): number {
  let [low, high] = [0, sorted.length];
  while (low < high) {
    const middle = (low + high) >> 1;
    if (sorted[middle]! <= time) low = middle + 1;
    else high = middle;
  }
  return low;
}

/** Summed in order of replicates, the second pass about the mean: the same bytes for the same times. */
function meanOf(values: Float64Array): { value: number; standardError: number } {
  const n = values.length;
  const value = values.reduce((sum, x) => sum + x, 0) / n;
  const squares = values.reduce((sum, x) => sum + (x - value) ** 2, 0);
  return { value, standardError: n < 2 ? NaN : Math.sqrt(squares / (n - 1) / n) };
}
