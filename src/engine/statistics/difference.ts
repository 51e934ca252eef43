/**
 * Differences of two independent jobs' means and standard deviations: the standard errors add in squares, and the interval is the
 * normal one at 95 %, nominal. Jobs that share seed and point are not independent and must not be compared so.
 */
import type { Moments } from './moments.ts';
import { normal95 } from './wilson.ts';

export interface Difference {
  /** First minus second, in the observable's own unit. */
  value: number;
  standardError: number;
  lower: number;
  upper: number;
}

type Spread = Pick<Moments, 'mean' | 'meanStandardError' | 'sd' | 'sdStandardError'>;

/** NaN where either job has too few replicates for the number or its error. */
export const differenceOfMeans = (first: Spread, second: Spread): Difference =>
  difference(first.mean - second.mean, first.meanStandardError, second.meanStandardError);

/** NaN below two replicates of either job. */
export const differenceOfSds = (first: Spread, second: Spread): Difference =>
  difference(first.sd - second.sd, first.sdStandardError, second.sdStandardError);

function difference(value: number, firstError: number, secondError: number): Difference {
  const standardError = Math.sqrt(firstError * firstError + secondError * secondError);
  const margin = normal95 * standardError;
  return { value, standardError, lower: value - margin, upper: value + margin };
}
