/** Covariances and correlations of the chosen pairs of a summary. */
import { crossMomentsOf, type CrossMoments } from './cross-moments.ts';
import type { Summary } from './summary.ts';

/** All pairs of the chosen observables (their places in the network), in order. */
export const pairsOf = (chosen: number[]): [number, number][] =>
  chosen.flatMap((first, i) => chosen.slice(i + 1).map((second): [number, number] => [first, second]));

/** Of a pair, by its place among the summary's pairs, at a grid point. */
export function crossMomentsAt(summary: Summary, pair: number, gridPoint: number): CrossMoments {
  const [first, second] = summary.shape.pairs![pair]!;
  const sumsOf = (observable: number) => summary.counts.sums(summary.cell(observable, gridPoint).cell);
  const cross = summary.cross.sums(pair * summary.gridPoints + gridPoint);
  return crossMomentsOf(summary.replicates, sumsOf(first), sumsOf(second), cross);
}
