/** How many replicates a wanted precision needs: normal approximation at 95 %, from the spread seen so far. */
import { normal95 as z } from './wilson.ts';

/** For a mean to ± `relativeHalfWidth` · mean, from the coefficient of variation sd/mean: ⌈(z · cv / ε)²⌉. */
export const replicatesForMean = (coefficientOfVariation: number, relativeHalfWidth: number): number =>
  wholeReplicates((z * coefficientOfVariation) / relativeHalfWidth);

/** For a mean to ± `halfWidth` in its own unit. */
export const replicatesForMeanWithin = (sd: number, halfWidth: number): number => wholeReplicates((z * sd) / halfWidth);

/** For a probability to ± `relativeHalfWidth` · p. */
export const replicatesForProbability = (p: number, relativeHalfWidth: number): number =>
  wholeReplicates((z * Math.sqrt((1 - p) / p)) / relativeHalfWidth);

/** Rounded up, after taking off what floating point adds to a whole number; Infinity where the target cannot be reached. */
function wholeReplicates(root: number): number {
  const replicates = root * root;
  return Number.isFinite(replicates) ? Math.max(1, Math.ceil(replicates * (1 - 1e-12))) : Infinity;
}
