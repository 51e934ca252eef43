/**
 * Statistics of observables that are not plain counts: exact sums of the first four powers, and a histogram whose bins are
 * 1/2048 of their value wide (whole numbers below 4096 have a bin of their own).
 */
import { exactProduct } from '../kernel/elementary/logarithm-pair.ts';
import type { ByteReader, ByteWriter } from './byte-codec.ts';
import { addExactly, additionsBetweenCarries, carry, exactTotal, limbsPerSum } from './exact-sum.ts';
import type { PowerSums } from './power-sums.ts';

/** Values must be below this in magnitude, so that fourth powers stay finite. */
export const largestReal = 1e75;
/** Exact sums come in units of 2^-realSumScale. */
export const realSumScale = 1074n;
const droppedBits = 9;
/** Partial sums that one value adds to its fourth power's sum, the most of the four. */
const additionsPerValue = 6;

const real = new Float64Array(1);
const words = new Uint32Array(real.buffer);

/** The bin of a value: a whole number that grows with the value. */
export function realBinOf(value: number): number {
  real[0] = value === 0 ? 0 : value;
  const high = words[1]!;
  return high >>> 31 ? -((high & 0x7fffffff) >>> droppedBits) - 1 : high >>> droppedBits;
}

/** The edge of a bin that is nearer to zero, signed, and the bin's width. */
export function realBinRange(bin: number): { edge: number; width: number } {
  const magnitude = (index: number): number => {
    words[0] = 0;
    words[1] = index << droppedBits;
    return real[0]!;
  };
  const index = bin < 0 ? -bin - 1 : bin;
  const edge = magnitude(index);
  const width = magnitude(index + 1) - edge;
  return { edge: bin < 0 ? -edge : edge, width };
}

export class RealCells {
  readonly #limbs: Float64Array;
  readonly #bins: Map<number, number>[];
  #additions = 0;

  constructor(readonly cells: number) {
    this.#limbs = new Float64Array(cells * 4 * limbsPerSum);
    this.#bins = Array.from({ length: cells }, () => new Map());
  }

  /** Adds `count` values of each cell: cell c's are values[c · stride …], finite and below `largestReal`. */
  add(values: Float64Array, stride: number, count: number): void {
    this.#carryBefore(count * additionsPerValue);
    for (let cell = 0; cell < this.cells; cell++) {
      const bins = this.#bins[cell]!;
      for (let i = cell * stride; i < cell * stride + count; i++) {
        const value = values[i]!;
        this.#addPowers(cell, value);
        const bin = realBinOf(value);
        bins.set(bin, (bins.get(bin) ?? 0) + 1);
      }
    }
  }

  /** Value, square, cube and fourth power as exact products, each split into doubles. */
  #addPowers(cell: number, value: number): void {
    const limbs = this.#limbs;
    const at = cell * 4 * limbsPerSum;
    const square = exactProduct(value, value);
    addExactly(limbs, at, value);
    for (const part of [square.high, square.low]) addExactly(limbs, at + limbsPerSum, part);
    for (const half of [square.high, square.low]) {
      const cube = exactProduct(half, value);
      for (const part of [cube.high, cube.low]) addExactly(limbs, at + 2 * limbsPerSum, part);
    }
    const crossed = exactProduct(2 * square.high, square.low);
    const products = [exactProduct(square.high, square.high), crossed, exactProduct(square.low, square.low)];
    for (const { high, low } of products) for (const part of [high, low]) addExactly(limbs, at + 3 * limbsPerSum, part);
  }

  #carryBefore(additions: number): void {
    this.#additions += additions;
    if (this.#additions < additionsBetweenCarries) return;
    for (let at = 0; at < this.#limbs.length; at += limbsPerSum) carry(this.#limbs, at);
    this.#additions = additions;
  }

  merge(other: RealCells): void {
    for (let at = 0; at < this.#limbs.length; at += limbsPerSum) {
      carry(this.#limbs, at);
      carry(other.#limbs, at);
    }
    this.#additions = 0;
    other.#additions = 0;
    for (let i = 0; i < this.#limbs.length; i++) this.#limbs[i]! += other.#limbs[i]!;
    this.#additions = 1;
    other.#bins.forEach((bins, cell) => {
      const own = this.#bins[cell]!;
      for (const [bin, count] of bins) own.set(bin, (own.get(bin) ?? 0) + count);
    });
  }

  /** Exact sums of the first four powers, in units of 2^-1074. */
  sums(cell: number): PowerSums {
    const at = cell * 4 * limbsPerSum;
    return [0, 1, 2, 3].map((power) => exactTotal(this.#limbs, at + power * limbsPerSum)) as PowerSums;
  }

  /** Occupied bins in growing order. */
  bins(cell: number): [bin: number, count: number][] {
    return [...this.#bins[cell]!].sort(([a], [b]) => a - b);
  }

  encode(writer: ByteWriter): void {
    for (let cell = 0; cell < this.cells; cell++) {
      const bins = this.bins(cell);
      writer.unsigned(bins.length);
      let previous = 0;
      for (const [bin, count] of bins) {
        writer.big(BigInt(bin - previous));
        writer.unsigned(count);
        previous = bin;
      }
      for (const sum of this.sums(cell)) writer.big(sum);
    }
  }

  decode(reader: ByteReader): void {
    for (let cell = 0; cell < this.cells; cell++) {
      const length = reader.unsigned();
      let bin = 0;
      for (let i = 0; i < length; i++) {
        bin += Number(reader.big());
        this.#bins[cell]!.set(bin, reader.unsigned());
      }
      for (let power = 0; power < 4; power++) this.#setSum((cell * 4 + power) * limbsPerSum, reader.big());
    }
  }

  #setSum(at: number, total: bigint): void {
    for (let i = 0; i < limbsPerSum - 1; i++) {
      this.#limbs[at + i] = Number(BigInt.asUintN(32, total));
      total >>= 32n;
    }
    this.#limbs[at + limbsPerSum - 1] = Number(total);
  }
}
