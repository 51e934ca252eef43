/**
 * The Kolmogorov–Smirnov distance between the distributions of two jobs, with a bootstrap interval and no p-value: counts are
 * tied, and the tables of the two-sample test are for continuous variables.
 *
 * With F, G the true and F̂, Ĝ the observed distribution functions, the distance D̂ = sup |F̂ − Ĝ| differs from D by at most
 * sup |(F̂ − F) − (Ĝ − G)|. The bootstrap gives the 95 % point q of that bound, so D̂ ± q covers D at least as often, ties or
 * not, and reaches down to 0 where nothing tells the two apart (the plain percentile interval never does: resampling only adds
 * distance). Resamples of more than `drawsAtMost` replicates are drawn smaller and scaled by √(drawn / n).
 * Source, from memory: Bickel & Freedman, "Some asymptotic theory for the bootstrap" (Ann. Stat. 1981); Bickel, Götze & van Zwet,
 * "Resampling fewer than n observations" (Stat. Sinica 1997).
 */
import type { Distribution } from '../ensemble.ts';
import { splitMix64 } from '../random/splitmix64.ts';
import { Xoshiro128 } from '../random/xoshiro128.ts';

/** (resamples + 1) · 0.95 is whole, so that the 95 % point is an order statistic. */
const resamples = 399;
const drawsAtMost = 2048;

export interface KsDistance {
  /** Between 0 and 1; of values in a bin wider than 1, only the bin's upper edge is compared. */
  distance: number;
  /** Ends of the 95 % interval, nominal and conservative. */
  lower: number;
  upper: number;
}

/** A distribution as shares on the values that occur in either job. */
interface Shares {
  n: number;
  cumulative: Float64Array;
}

/**
 * The jobs must be independent (they share no seed and point) and the distributions of one kind of observable. `seed` is a
 * 64-bit word: the same seed and distributions give the same interval. Throws RangeError where a job has no replicate.
 */
export function ksDistance(first: Distribution, second: Distribution, seed: bigint): KsDistance {
  const values = [...new Set([...first.values, ...second.values])].sort((a, b) => a - b);
  const [a, b] = [sharesOn(values, first), sharesOn(values, second)];
  const distance = largest(values.length, (i) => a.cumulative[i]! - b.cumulative[i]!);
  const generator = new Xoshiro128(splitMix64(seed, 2) as [bigint, bigint]);
  const deviations = new Float64Array(resamples);
  for (let resample = 0; resample < resamples; resample++) {
    const [left, right] = [deviationOf(a, generator), deviationOf(b, generator)];
    deviations[resample] = largest(values.length, (i) => left[i]! - right[i]!);
  }
  const margin = deviations.sort()[Math.round((resamples + 1) * 0.95) - 1]!;
  return { distance, lower: Math.max(0, distance - margin), upper: Math.min(1, distance + margin) };
}

function largest(length: number, difference: (i: number) => number): number {
  let most = 0;
  for (let i = 0; i < length; i++) most = Math.max(most, Math.abs(difference(i)));
  return most;
}

function sharesOn(values: number[], { values: occupied, counts }: Distribution): Shares {
  const n = counts.reduce((sum, count) => sum + count, 0);
  if (n === 0) throw new RangeError('a distance needs at least one replicate of each job');
  const countOf = new Map(occupied.map((value, i) => [value, counts[i]!]));
  let seen = 0;
  return { n, cumulative: Float64Array.from(values, (value) => (seen += countOf.get(value) ?? 0) / n) };
}

/** F* − F̂ of one resample, at the scale of n replicates. */
function deviationOf({ n, cumulative }: Shares, generator: Xoshiro128): Float64Array {
  const draws = Math.min(n, drawsAtMost);
  const drawn = new Float64Array(cumulative.length);
  for (let draw = 0; draw < draws; draw++) drawn[firstAbove(cumulative, generator.next() * 2 ** -32)]! += 1;
  const scale = Math.sqrt(draws / n);
  let seen = 0;
  return drawn.map((count, i) => scale * ((seen += count) / draws - cumulative[i]!));
}

/** The first index whose cumulative share is above u < 1; the last cumulative share is 1. */
function firstAbove(cumulative: Float64Array, u: number): number {
  let [low, high] = [0, cumulative.length - 1];
  while (low < high) {
    const middle = (low + high) >> 1;
    if (cumulative[middle]! > u) high = middle;
    else low = middle + 1;
  }
  return low;
}
