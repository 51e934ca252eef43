/**
 * Exact sums of powers of integers.
 *
 * A group of up to 1024 values is summed in doubles about its least value, with squares split at 2^20 so that every partial
 * sum stays below 2^53 while the values differ by less than 2^20; a wider group is summed in big integers. Exactness makes
 * the result independent of grouping and order, and free of the cancellation of naive sums of squares.
 */

/** Σx, Σx², Σx³, Σx⁴. */
export type PowerSums = [bigint, bigint, bigint, bigint];

export const noSums = (): PowerSums => [0n, 0n, 0n, 0n];

export function addSums(target: PowerSums, other: PowerSums): void {
  target[0] += other[0];
  target[1] += other[1];
  target[2] += other[2];
  target[3] += other[3];
}

const largestGroup = 1024;
const split = 2 ** 20;

/** The sums of values[from … from + length), each an integer in [0, 2^31); length ≤ 1024. */
export function groupSums(values: Int32Array, from: number, length: number): PowerSums {
  if (length > largestGroup) throw new RangeError(`at most ${largestGroup} values at a time`);
  let least = Infinity;
  let most = -Infinity;
  for (let i = from; i < from + length; i++) {
    if (values[i]! < least) least = values[i]!;
    if (values[i]! > most) most = values[i]!;
  }
  if (most - least >= split) return wideSums(values, from, length);
  let [d1, d2, upperOfCube, lowerOfCube, upperUpper, upperLower, lowerLower] = [0, 0, 0, 0, 0, 0, 0];
  for (let i = from; i < from + length; i++) {
    const d = values[i]! - least;
    const square = d * d;
    const upper = Math.floor(square / split);
    const lower = square - upper * split;
    d1 += d;
    d2 += square;
    upperOfCube += d * upper;
    lowerOfCube += d * lower;
    upperUpper += upper * upper;
    upperLower += upper * lower;
    lowerLower += lower * lower;
  }
  const cubes = (BigInt(upperOfCube) << 20n) + BigInt(lowerOfCube);
  const fourths = (BigInt(upperUpper) << 40n) + (BigInt(upperLower) << 21n) + BigInt(lowerLower);
  return shiftedSums(BigInt(length), BigInt(least), [BigInt(d1), BigInt(d2), cubes, fourths]);
}

/** Sums of powers of c + d from those of d. */
function shiftedSums(n: bigint, c: bigint, [d1, d2, d3, d4]: PowerSums): PowerSums {
  const c2 = c * c;
  return [
    n * c + d1,
    n * c2 + 2n * c * d1 + d2,
    n * c2 * c + 3n * c2 * d1 + 3n * c * d2 + d3,
    n * c2 * c2 + 4n * c2 * c * d1 + 6n * c2 * d2 + 4n * c * d3 + d4,
  ];
}

function wideSums(values: Int32Array, from: number, length: number): PowerSums {
  const sums = noSums();
  for (let i = from; i < from + length; i++) addPowers(sums, BigInt(values[i]!), 1n);
  return sums;
}

/** Adds `times` copies of x. */
export function addPowers(sums: PowerSums, x: bigint, times: bigint): void {
  const square = x * x;
  sums[0] += times * x;
  sums[1] += times * square;
  sums[2] += times * square * x;
  sums[3] += times * square * square;
}
