/**
 * Hartigan's dip: the largest distance between a distribution function and the unimodal one nearest to it.
 *
 * For a distribution function that is straight between its knots, by narrowing the modal interval between the greatest convex
 * minorant and the least concave majorant.
 * Source: Hartigan & Hartigan, "The dip test of unimodality" (Ann. Stat. 1985), section 3.
 */

/** Knots of a distribution function: `at` growing strictly, `share` growing from 0 to 1. */
export interface Knots {
  at: ArrayLike<number>;
  share: ArrayLike<number>;
}

/** The dip, from 0 (unimodal) to 1/4. */
export function dip({ at, share }: Knots): number {
  let first = 0;
  let last = at.length - 1;
  let twice = 0;
  while (first < last) {
    const minorant = hull(at, share, first, last, 1);
    const majorant = hull(at, share, first, last, -1);
    const below = widest(at, share, minorant, majorant);
    const above = widest(at, share, majorant, minorant);
    const gap = Math.max(below.gap, above.gap);
    if (gap <= twice) break;
    const modeFirst = above.gap > below.gap ? minorant.findLast((knot) => at[knot]! <= at[above.knot]!)! : below.knot;
    const modeLast = above.gap > below.gap ? above.knot : majorant.find((knot) => at[knot]! >= at[below.knot]!)!;
    twice = Math.max(
      twice,
      distance(at, share, minorant, first, modeFirst),
      distance(at, share, majorant, modeLast, last),
    );
    if (modeFirst === first && modeLast === last) break;
    first = modeFirst;
    last = modeLast;
  }
  return twice / 2;
}

/** Knots of the greatest convex minorant (`side` 1) or the least concave majorant (−1) between two knots. */
function hull(at: ArrayLike<number>, share: ArrayLike<number>, first: number, last: number, side: 1 | -1): number[] {
  const knots: number[] = [];
  for (let i = first; i <= last; i++) {
    while (knots.length > 1) {
      const [a, b] = [knots[knots.length - 2]!, knots[knots.length - 1]!];
      const turn = (share[b]! - share[a]!) * (at[i]! - at[b]!) - (share[i]! - share[b]!) * (at[b]! - at[a]!);
      if (side * turn < 0) break;
      knots.pop();
    }
    knots.push(i);
  }
  return knots;
}

/** The height at `x` of the straight line through two knots. */
function heightAt(at: ArrayLike<number>, share: ArrayLike<number>, [a, b]: [number, number], x: number): number {
  return share[a]! + ((x - at[a]!) / (at[b]! - at[a]!)) * (share[b]! - share[a]!);
}

/** The knot of `chain` that is farthest from the other chain, and how far. */
function widest(
  at: ArrayLike<number>,
  share: ArrayLike<number>,
  chain: number[],
  other: number[],
): { knot: number; gap: number } {
  let best = { knot: chain[0]!, gap: 0 };
  let segment = 0;
  for (const knot of chain) {
    while (segment < other.length - 2 && at[other[segment + 1]!]! < at[knot]!) segment++;
    const height = heightAt(at, share, [other[segment]!, other[segment + 1]!], at[knot]!);
    const gap = Math.abs(height - share[knot]!);
    if (gap > best.gap) best = { knot, gap };
  }
  return best;
}

/** The largest distance of the distribution function from a chain of its knots between two knots of the chain. */
function distance(
  at: ArrayLike<number>,
  share: ArrayLike<number>,
  chain: number[],
  first: number,
  last: number,
): number {
  let largest = 0;
  for (let segment = 0; segment < chain.length - 1; segment++) {
    const [a, b] = [chain[segment]!, chain[segment + 1]!];
    if (a < first || b > last) continue;
    for (let i = a + 1; i < b; i++)
      largest = Math.max(largest, Math.abs(share[i]! - heightAt(at, share, [a, b], at[i]!)));
  }
  return largest;
}
