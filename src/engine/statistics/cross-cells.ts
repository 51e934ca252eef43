/**
 * Exact sums of products of two counts, for pairs of observables at every grid time: what covariance, correlation and their
 * errors are made of. Exactness makes them independent of grouping and order.
 */
import type { ByteReader, ByteWriter } from './byte-codec.ts';

/** Σxy, Σx²y, Σxy², Σx²y², Σx³y, Σxy³. */
export type CrossSums = [bigint, bigint, bigint, bigint, bigint, bigint];

export const crossPowers = [
  [1, 1],
  [2, 1],
  [1, 2],
  [2, 2],
  [3, 1],
  [1, 3],
] as const;

export const noCrossSums = (): CrossSums => [0n, 0n, 0n, 0n, 0n, 0n];

export function addCrossSums(target: CrossSums, other: CrossSums): void {
  for (let i = 0; i < target.length; i++) target[i]! += other[i]!;
}

export class CrossCells {
  readonly #sums: CrossSums[];

  constructor(readonly cells: number) {
    this.#sums = Array.from({ length: cells }, noCrossSums);
  }

  /** Adds `count` pairs of values to a cell: those from `first` and from `second` on, each in [0, 2^31). */
  add(cell: number, values: Int32Array, first: number, second: number, count: number): void {
    let [largestX, largestY] = [0, 0];
    for (let i = 0; i < count; i++) {
      if (values[first + i]! > largestX) largestX = values[first + i]!;
      if (values[second + i]! > largestY) largestY = values[second + i]!;
    }
    const sums = this.#sums[cell]!;
    if (count * Math.max(largestX, largestY) ** 4 <= Number.MAX_SAFE_INTEGER) {
      const group = [0, 0, 0, 0, 0, 0];
      for (let i = 0; i < count; i++) {
        const x = values[first + i]!;
        const y = values[second + i]!;
        const product = x * y;
        group[0]! += product;
        group[1]! += x * product;
        group[2]! += y * product;
        group[3]! += product * product;
        group[4]! += x * x * product;
        group[5]! += y * y * product;
      }
      for (let i = 0; i < sums.length; i++) sums[i]! += BigInt(group[i]!);
      return;
    }
    for (let i = 0; i < count; i++) {
      const x = BigInt(values[first + i]!);
      const y = BigInt(values[second + i]!);
      const product = x * y;
      addCrossSums(sums, [product, x * product, y * product, product * product, x * x * product, y * y * product]);
    }
  }

  merge(other: CrossCells): void {
    for (const [cell, sums] of this.#sums.entries()) addCrossSums(sums, other.sums(cell));
  }

  sums(cell: number): CrossSums {
    return this.#sums[cell]!;
  }

  encode(writer: ByteWriter): void {
    for (const sums of this.#sums) for (const sum of sums) writer.big(sum);
  }

  /** Adds what `encode` wrote. */
  addEncoded(reader: ByteReader): void {
    for (const sums of this.#sums) for (let i = 0; i < sums.length; i++) sums[i]! += reader.big();
  }
}
