/**
 * The specification of composition-rejection, the exact method for large networks, which the reference (reference-groups.ts) and
 * the generated kernel (kernel/composition-rejection.ts) obey bit for bit. With the direct method it agrees in distribution.
 *
 * Source: Slepoy, Thompson & Plimpton, "A constant-time kinetic Monte Carlo algorithm for simulation of large biochemical reaction
 * networks" (J. Chem. Phys. 128, 205101, 2008; citation from memory). What is not said here is as in direct-method.ts.
 *
 * 1. Propensities are worked out as in the direct method, but after a firing only those that a dependency graph names
 *    (dependency-graph.ts), in its order; at the start and after timed or triggered changes all, in the order of the reactions.
 *    One that is negative, NaN or above 1e300 fails the replicate.
 * 2. Each is rounded to 53 − d significant bits, halves up, where 2^d is the least power of two not below the number of
 *    reactions and d at least 1; below 2^−1022 it counts as 0. For 10,000 reactions that moves it by 2^−39 of itself at most.
 * 3. Groups. The reactions with 2^e ≤ a < 2^(e+1) are group e. Sums within a group are then whole multiples of one unit below
 *    2^53 of it, so that adding and taking away is exact: a sum never drifts, whatever the order and number of updates, nothing
 *    has to be added anew from time to time, and the sum of a group without members is exactly 0.
 * 4. Members of a group stand in a list: a reaction whose group changes is taken from its old list, the last member of which
 *    takes its place, and is put at the end of the new one.
 * 5. The total is the sum over the groups that have members, from the largest e down, starting from 0; above 1e300 it fails.
 * 6. Draws, in this order: waiting time and choice as in the direct method. The group is the first from the largest e down whose
 *    prefix sum is above u · total. Then, until one is taken: v = u · (number of members) with a fresh u; the member is number
 *    ⌊v⌋ of the list, and is taken where (v − ⌊v⌋) · 2^(e+1) < a. At least half of all tries succeed.
 */
import { bitsOf } from '../kernel/elementary/double-bits.ts';

/** Below this a propensity counts as 0. */
export const leastPropensity = 2 ** -1022;

/** Bits of a propensity's fraction that are rounded away, d, for a number of reactions. */
export const roundedBits = (reactions: number): number => {
  let bits = 1;
  while (2 ** bits < reactions) bits++;
  return bits;
};

/** What is added to a propensity's bits before those below `mask` are cleared. */
export const roundingBits = (reactions: number): { half: bigint; mask: bigint } => {
  const bits = BigInt(roundedBits(reactions));
  return { half: 1n << (bits - 1n), mask: BigInt.asUintN(64, -1n << bits) };
};

const real = new Float64Array(1);
const word = new BigUint64Array(real.buffer);

/** A propensity, at least 0, as the groups count it. */
export function roundedPropensity(propensity: number, { half, mask }: { half: bigint; mask: bigint }): number {
  real[0] = propensity;
  word[0] = (word[0]! + half) & mask;
  const rounded = real[0]!;
  return rounded >= leastPropensity ? rounded : 0;
}

/** The exponent field of a rounded propensity: e + 1023; 0 for those in no group. */
export const groupOf = (rounded: number): number => Number(bitsOf(rounded) >> 52n);
