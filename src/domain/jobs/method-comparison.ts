/** What exact and leaped pilots say of one another: cost, speed and the difference of the means at the horizon. */
import { studentQuantile } from './student-quantile.ts';

/** ε of a leap job that does not say: the published examples' own. */
export const defaultEpsilon = 0.03;

export interface HorizonMean {
  /** Of a species or a named quantity. */
  id: string;
  mean: number;
  sd: number;
}

export interface MethodPilot {
  /** Complete replicates. */
  replicates: number;
  atHorizon: HorizonMean[];
}

export interface MeanDifference {
  id: string;
  exactMean: number;
  leapMean: number;
  /** Leaped less exact, with its 95 % interval; the interval is null where a pilot has fewer than two replicates. */
  difference: number;
  interval: { low: number; high: number } | null;
}

/**
 * Differences of means of independent samples with unequal variances: Welch's interval, degrees of freedom by Welch and
 * Satterthwaite (Welch 1947, Biometrika 34:28; citation from memory). It holds the leaping's error and the pilots' chance together: an
 * interval that contains 0 shows no error, but does not prove that there is none.
 */
export function compareMeans(exact: MethodPilot, leap: MethodPilot): MeanDifference[] {
  return exact.atHorizon.flatMap((ofExact) => {
    const ofLeap = leap.atHorizon.find(({ id }) => id === ofExact.id);
    if (!ofLeap) return [];
    const difference = ofLeap.mean - ofExact.mean;
    const half = halfWidth(
      { variance: ofExact.sd ** 2 / exact.replicates, replicates: exact.replicates },
      { variance: ofLeap.sd ** 2 / leap.replicates, replicates: leap.replicates },
    );
    return [
      {
        id: ofExact.id,
        exactMean: ofExact.mean,
        leapMean: ofLeap.mean,
        difference,
        interval: half === null ? null : { low: difference - half, high: difference + half },
      },
    ];
  });
}

interface OfMean {
  variance: number;
  replicates: number;
}

function halfWidth(a: OfMean, b: OfMean): number | null {
  if (a.replicates < 2 || b.replicates < 2) return null;
  const variance = a.variance + b.variance;
  if (variance === 0) return 0;
  const degrees = variance ** 2 / (a.variance ** 2 / (a.replicates - 1) + b.variance ** 2 / (b.replicates - 1));
  return studentQuantile(0.975, Math.max(1, Math.floor(degrees))) * Math.sqrt(variance);
}
