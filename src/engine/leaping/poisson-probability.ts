/**
 * ln P(k; μ) of the Poisson law, k a whole number from 0, μ at least 10, with an absolute error of about 10⁻¹⁴ near the mean,
 * whatever its size.
 *
 * Source: Loader, "Fast and accurate computation of binomial probabilities" (2000; citation from memory): from k = 16 up
 *   ln P = −½ ln(2πk) − δ(k) − D(k, μ),
 * with Stirling's error δ(k) = 1/12k − 1/360k³ + 1/1260k⁵ − 1/1680k⁷ + 1/1188k⁹ and the deviance D = k ln(k/μ) + μ − k, which for
 * |k − μ| < (k + μ)/10 is summed from v = (k − μ)/(k + μ) as (k − μ)v + 2kv(v²/3 + v⁴/5 + …): no digits cancel. Eight terms leave
 * an error below 10⁻¹⁹ of it. Below k = 16 the factorial is a whole number that a double holds: ln P = k ln μ − μ − ln k!.
 */
import { logarithm } from '../kernel/elementary/logarithm.ts';

/** From this k up, Stirling's series is exact to the last place. */
export const leastOfSeries = 16;
export const twoPi = 6.283185307179586;
/** Coefficients of 1/k² in Stirling's error, from the last to the first. */
export const stirlingSeries = [1 / 1188, -1 / 1680, 1 / 1260, -1 / 360, 1 / 12];
/** Coefficients of v² in the deviance, from the last to the first. */
export const devianceSeries = [1 / 17, 1 / 15, 1 / 13, 1 / 11, 1 / 9, 1 / 7, 1 / 5, 1 / 3];

const horner = (coefficients: readonly number[], x: number): number =>
  coefficients.slice(1).reduce((sum, coefficient) => sum * x + coefficient, coefficients[0]!);

export function logPoissonProbability(k: number, mean: number): number {
  if (k < leastOfSeries) {
    let factorial = 1;
    for (let factor = 2; factor <= k; factor++) factorial *= factor;
    return k * logarithm(mean) - mean - logarithm(factorial);
  }
  const stirling = horner(stirlingSeries, 1 / (k * k)) / k;
  return -0.5 * logarithm(twoPi * k) - stirling - deviance(k, mean);
}

function deviance(k: number, mean: number): number {
  const difference = k - mean;
  if (!(Math.abs(difference) < 0.1 * (k + mean))) return k * logarithm(k / mean) + mean - k;
  const v = difference / (k + mean);
  const square = v * v;
  return difference * v + 2 * k * v * (square * horner(devianceSeries, square));
}
