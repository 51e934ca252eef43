/**
 * Evidence that an observable has more than one mode: Hartigan's dip against samples of a uniform distribution, which has
 * the largest dips of the unimodal ones in large samples (Hartigan & Hartigan, Ann. Stat. 1985).
 *
 * Counts are tied, and a distribution function with steps has a large dip whatever its shape. So each value is spread evenly
 * over the distance between neighbouring possible values (the greatest common divisor of the differences that occurred: 2 where
 * a count stays even), in the data as in the uniform samples. That makes the samples' dips the larger ones: the test is
 * conservative, a single mode is flagged in fewer cases than the level says.
 */
import type { Distribution } from '../ensemble.ts';
import { replicateState, streamBase } from '../random/stream-key.ts';
import { uniform53, Xoshiro256 } from '../random/xoshiro256.ts';
import { dip } from './dip.ts';

export interface ModeEvidence {
  dip: number;
  /** (1 + uniform samples with at least this dip) / (1 + uniform samples). */
  pValue: number;
  uniformSamples: number;
  /** The p-value is at most `modeLevel`. */
  moreThanOne: boolean;
}

/** How often, at most, a distribution with one mode is flagged. */
export const modeLevel = 0.01;
const uniformSamples = 499;
/** Larger ensembles are compared with samples of this size, by √n · dip, whose distribution hardly changes from here on. */
const sampleMost = 400;
const sampleLeast = 20;
const samplePlaces = 4096;

/** √n · dip of uniform samples of `min(replicates, 400)` values, in growing order: the same for the same seed. */
export function uniformDips(seed: string, replicates: number): Float64Array {
  const size = sampleSize(replicates);
  const generator = new Xoshiro256(replicateState(streamBase(seed, 'modes', 0), 0));
  const dips = new Float64Array(uniformSamples);
  for (let sample = 0; sample < uniformSamples; sample++) {
    const counts = new Map<number, number>();
    for (let i = 0; i < size; i++) {
      const place = Math.floor(uniform53(generator.next()) * samplePlaces);
      counts.set(place, (counts.get(place) ?? 0) + 1);
    }
    const values = [...counts.keys()].sort((a, b) => a - b);
    dips[sample] =
      Math.sqrt(size) *
      dipOfCounts(
        values,
        values.map((value) => counts.get(value)!),
        1,
      );
  }
  return dips.sort();
}

export const sampleSize = (replicates: number): number => Math.min(replicates, sampleMost);

/**
 * Null where nothing can be said: fewer than 20 replicates, or values that are not known one by one (real numbers, counts from
 * 4096 on). `dips`: uniformDips of as many replicates.
 */
export function modeEvidence({ values, widths, counts }: Distribution, dips: Float64Array): ModeEvidence | null {
  const replicates = counts.reduce((sum, count) => sum + count, 0);
  if (replicates < sampleLeast || widths.some((width) => width !== 1) || !values.every(Number.isInteger)) return null;
  const value = dipOfCounts(values, counts, spacingOf(values));
  const scaled = Math.sqrt(replicates) * value;
  const pValue = (1 + dips.filter((other) => other >= scaled).length) / (1 + dips.length);
  return { dip: value, pValue, uniformSamples: dips.length, moreThanOne: pValue <= modeLevel };
}

/** The greatest common divisor of the differences between values in growing order; 1 for a single value. */
function spacingOf(values: number[]): number {
  let divisor = 0;
  for (let value of values) {
    value -= values[0]!;
    while (value > 0) [divisor, value] = [value, divisor % value];
  }
  return divisor || 1;
}

/** The dip of values in growing order that are spread evenly over the `spacing` around them. */
function dipOfCounts(values: number[], counts: number[], spacing: number): number {
  const total = counts.reduce((sum, count) => sum + count, 0);
  const at: number[] = [];
  const share: number[] = [];
  let before = 0;
  for (const [i, value] of values.entries()) {
    const edge = value - spacing / 2;
    if (at[at.length - 1] !== edge) {
      at.push(edge);
      share.push(before / total);
    }
    before += counts[i]!;
    at.push(value + spacing / 2);
    share.push(before / total);
  }
  return dip({ at, share });
}
