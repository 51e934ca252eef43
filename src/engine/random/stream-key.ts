/** The stream of each replicate: seed, purpose, point and replicate make one key, the key makes the generator's state. */
import type { StreamPurpose } from '../ensemble.ts';
import { mix64, splitMix64 } from './splitmix64.ts';
import type { Xoshiro256State } from './xoshiro256.ts';

const word = (1n << 64n) - 1n;
export const replicatesPerPoint = 2 ** 40;
export const pointsPerSeed = 2 ** 24;

/** Fixed for ever: a change would change every result. */
const purposeWords: Record<StreamPurpose, bigint> = {
  job: 0n,
  pilot: 0x70696c6f74n,
  preview: 0x70726576696577n,
  modes: 0x6d6f646573n,
};

/** `seed` is a decimal string of an integer in [0, 2^64). Throws RangeError on anything else. */
export function parseSeed(seed: string): bigint {
  if (!/^\d{1,20}$/.test(seed)) throw new RangeError(`a seed is a decimal integer from 0 to 2^64 − 1, not "${seed}"`);
  const value = BigInt(seed);
  if (value > word) throw new RangeError(`a seed is at most 2^64 − 1, not ${seed}`);
  return value;
}

/**
 * What the keys of a point's replicates are counted from: key(replicate) = mix64(streamBase + replicate).
 * Injective for point < 2^24 and replicate < 2^40.
 */
export function streamBase(seed: string, purpose: StreamPurpose, point: number): bigint {
  if (!Number.isInteger(point) || point < 0 || point >= pointsPerSeed)
    throw new RangeError(`point ${point} is out of range`);
  return (mix64(parseSeed(seed) ^ purposeWords[purpose]) + BigInt(point) * BigInt(replicatesPerPoint)) & word;
}

/** The starting state of replicate `replicate`: four outputs of SplitMix64 from its key. */
export function replicateState(base: bigint, replicate: number): Xoshiro256State {
  if (!Number.isInteger(replicate) || replicate < 0 || replicate >= replicatesPerPoint)
    throw new RangeError(`replicate ${replicate} is out of range`);
  return splitMix64(mix64((base + BigInt(replicate)) & word), 4) as Xoshiro256State;
}
