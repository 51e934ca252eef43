/**
 * SplitMix64: the 64-bit mixer that turns seeds and indices into well-spread starting states.
 * Source: Steele, Lea & Flood, "Fast splittable pseudorandom number generators" (OOPSLA 2014); constants of variant 13 by Stafford.
 */

const word = (1n << 64n) - 1n;
/** 2^64 divided by the golden ratio, odd. */
export const goldenGamma = 0x9e3779b97f4a7c15n;
export const firstMultiplier = 0xbf58476d1ce4e5b9n;
export const secondMultiplier = 0x94d049bb133111ebn;

/** A bijection of the 64-bit words; `z` and the answer are in [0, 2^64). */
export function mix64(z: bigint): bigint {
  z = ((z ^ (z >> 30n)) * firstMultiplier) & word;
  z = ((z ^ (z >> 27n)) * secondMultiplier) & word;
  return z ^ (z >> 31n);
}

/** The first `count` outputs of SplitMix64 started at `seed`. */
export function splitMix64(seed: bigint, count: number): bigint[] {
  const outputs: bigint[] = [];
  for (let step = 1; step <= count; step++) outputs.push(mix64((seed + BigInt(step) * goldenGamma) & word));
  return outputs;
}
