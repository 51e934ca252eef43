/**
 * Exact sums of doubles, so that a sum does not depend on the order of its terms.
 *
 * A double is a whole multiple of 2^-1074; the sum is kept as whole numbers of 2^(32 i − 1074) in doubles, each of which stays
 * exact for 2^20 additions between carries.
 * Source: the small superaccumulator of Neal, "Fast exact summation using small and large superaccumulators" (2015), with
 * shorter limbs.
 */

const limbBits = 32;
const limb = 2 ** limbBits;
/** 2098 bits of the doubles, and room for 2^30 additions. */
export const limbsPerSum = 68;
export const additionsBetweenCarries = 2 ** 20;

const real = new Float64Array(1);
const words = new Uint32Array(real.buffer);

/** Adds a finite `value` into `limbs[at … at + limbsPerSum)`. */
export function addExactly(limbs: Float64Array, at: number, value: number): void {
  if (value === 0) return;
  real[0] = value;
  const high = words[1]!;
  const exponent = (high >>> 20) & 0x7ff;
  const fraction = (high & 0xfffff) * limb + words[0]! + (exponent === 0 ? 0 : 2 ** 52);
  const place = exponent === 0 ? 0 : exponent - 1;
  const shifted = fraction * 2 ** (place % limbBits);
  const upper = Math.floor(shifted / limb);
  const top = Math.floor(upper / limb);
  const first = at + Math.floor(place / limbBits);
  const sign = high >>> 31 ? -1 : 1;
  limbs[first]! += sign * (shifted - upper * limb);
  limbs[first + 1]! += sign * (upper - top * limb);
  limbs[first + 2]! += sign * top;
}

/** Carries, so that another 2^20 additions are exact. */
export function carry(limbs: Float64Array, at: number): void {
  for (let i = at; i < at + limbsPerSum - 1; i++) {
    const over = Math.floor(limbs[i]! / limb);
    limbs[i]! -= over * limb;
    limbs[i + 1]! += over;
  }
}

/** The sum in units of 2^-1074. */
export function exactTotal(limbs: Float64Array, at: number): bigint {
  let total = 0n;
  for (let i = at + limbsPerSum - 1; i >= at; i--) total = (total << BigInt(limbBits)) + BigInt(limbs[i]!);
  return total;
}
