/**
 * Histograms of counts for many cells (an observable at a grid time) in one pool of 32-bit numbers: each cell holds the window
 * of bins between its least and largest value. Counts above the exact range also enter exact power sums.
 */
import { binMiddle, binOf, exactBelow } from './bins.ts';
import type { ByteReader, ByteWriter } from './byte-codec.ts';
import { addPowers, addSums, groupSums, noSums, type PowerSums } from './power-sums.ts';

export class CountCells {
  /** Window of cell c: bins first[c] … first[c] + length[c] − 1 at pool[offset[c] …]. */
  #pool = new Uint32Array(1024);
  #used = 0;
  readonly #offset: Float64Array;
  readonly #first: Int32Array;
  readonly #length: Int32Array;
  /** Power sums of the values from `exactBelow` on; absent where there are none. */
  readonly #above = new Map<number, PowerSums>();

  constructor(readonly cells: number) {
    this.#offset = new Float64Array(cells);
    this.#first = new Int32Array(cells);
    this.#length = new Int32Array(cells);
  }

  /** Adds `count` values of each cell: cell c's are values[c · stride …], each in [0, 2^31). */
  add(values: Int32Array, stride: number, count: number): void {
    if (count === 0) return;
    for (let cell = 0; cell < this.cells; cell++) {
      const from = cell * stride;
      const end = from + count;
      let least = values[from]!;
      let most = least;
      for (let i = from + 1; i < end; i++) {
        const value = values[i]!;
        if (value < least) least = value;
        else if (value > most) most = value;
      }
      this.#widen(cell, binOf(least), binOf(most));
      const pool = this.#pool;
      const origin = this.#offset[cell]! - this.#first[cell]!;
      if (most < exactBelow) {
        for (let i = from; i < end; i++) pool[origin + values[i]!]!++;
      } else {
        for (let i = from; i < end; i++) pool[origin + binOf(values[i]!)]!++;
        this.#addAbove(cell, values, from, count, least);
      }
    }
  }

  #addAbove(cell: number, values: Int32Array, from: number, count: number, least: number): void {
    const large =
      least >= exactBelow
        ? values.slice(from, from + count)
        : values.slice(from, from + count).filter((v) => v >= exactBelow);
    for (let i = 0; i < large.length; i += 1024)
      this.#sumsAbove(cell, groupSums(large, i, Math.min(1024, large.length - i)));
  }

  #sumsAbove(cell: number, sums: PowerSums): void {
    const known = this.#above.get(cell);
    if (known) addSums(known, sums);
    else this.#above.set(cell, sums);
  }

  /** Makes the cell's window hold the bins from `least` to `most`. */
  #widen(cell: number, least: number, most: number): void {
    const length = this.#length[cell]!;
    const first = this.#first[cell]!;
    if (length > 0 && least >= first && most < first + length) return;
    const margin = 4 + (length >> 2);
    const newFirst = length === 0 ? Math.max(0, least - margin) : least < first ? Math.max(0, least - margin) : first;
    const newEnd = length === 0 || most >= first + length ? most + 1 + margin : first + length;
    const offset = this.#reserve(newEnd - newFirst);
    const old = this.#offset[cell]!;
    this.#pool.copyWithin(offset + first - newFirst, old, old + length);
    this.#offset[cell] = offset;
    this.#first[cell] = newFirst;
    this.#length[cell] = newEnd - newFirst;
  }

  /** A zeroed stretch of the pool; abandoned windows are squeezed out when it is full. */
  #reserve(length: number): number {
    if (this.#used + length > this.#pool.length) {
      let live = 0;
      for (let cell = 0; cell < this.cells; cell++) live += this.#length[cell]!;
      const pool = new Uint32Array(Math.ceil((live + length) * 1.5) + 1024);
      let used = 0;
      for (let cell = 0; cell < this.cells; cell++) {
        const offset = this.#offset[cell]!;
        pool.set(this.#pool.subarray(offset, offset + this.#length[cell]!), used);
        this.#offset[cell] = used;
        used += this.#length[cell]!;
      }
      this.#pool = pool;
      this.#used = used;
    }
    const offset = this.#used;
    this.#used += length;
    return offset;
  }

  merge(other: CountCells): void {
    for (let cell = 0; cell < this.cells; cell++) {
      const { first, counts } = other.window(cell);
      if (counts.length === 0) continue;
      this.#widen(cell, first, first + counts.length - 1);
      const origin = this.#offset[cell]! + first - this.#first[cell]!;
      for (let i = 0; i < counts.length; i++) this.#pool[origin + i]! += counts[i]!;
      const above = other.#above.get(cell);
      if (above) this.#sumsAbove(cell, [...above]);
    }
  }

  /** The occupied bins of a cell: the first one's number and how often each occurred, without zeros at either end. */
  window(cell: number): { first: number; counts: Uint32Array } {
    const offset = this.#offset[cell]!;
    let start = 0;
    let end = this.#length[cell]!;
    while (start < end && this.#pool[offset + start] === 0) start++;
    while (end > start && this.#pool[offset + end - 1] === 0) end--;
    return { first: this.#first[cell]! + start, counts: this.#pool.subarray(offset + start, offset + end) };
  }

  /** The exact sums as doubles where all of them are below 2^53; null for others. */
  smallSums(cell: number): SmallSums | null {
    const { first, counts } = this.window(cell);
    return first + counts.length > exactBelow ? null : smallSumsOfWindow(counts, first, counts.length);
  }

  /** Exact sums of the powers of all values of a cell. */
  sums(cell: number): PowerSums {
    const { first, counts } = this.window(cell);
    const exactEnd = Math.min(counts.length, exactBelow - first);
    const sums = exactSumsOfWindow(counts, first, exactEnd);
    const above = this.#above.get(cell);
    if (above) addSums(sums, above);
    return sums;
  }

  encode(writer: ByteWriter): void {
    for (let cell = 0; cell < this.cells; cell++) {
      const { first, counts } = this.window(cell);
      writer.unsigned(counts.length);
      if (counts.length === 0) continue;
      writer.unsigned(first);
      for (const count of counts) writer.unsigned(count);
      const above = this.#above.get(cell);
      if (first + counts.length > exactBelow) for (const sum of above!) writer.big(sum);
    }
  }

  decode(reader: ByteReader): void {
    for (let cell = 0; cell < this.cells; cell++) {
      const length = reader.unsigned();
      if (length === 0) continue;
      const first = reader.unsigned();
      const offset = this.#reserve(length);
      for (let i = 0; i < length; i++) this.#pool[offset + i] = reader.unsigned();
      this.#offset[cell] = offset;
      this.#first[cell] = first;
      this.#length[cell] = length;
      if (first + length > exactBelow) this.#above.set(cell, [reader.big(), reader.big(), reader.big(), reader.big()]);
    }
  }
}

type SmallSums = [number, number, number, number];

/** Sums over bins that hold one count each; null where a double could not hold them. */
function smallSumsOfWindow(counts: Uint32Array, first: number, end: number): SmallSums | null {
  let total = 0;
  for (let i = 0; i < end; i++) total += counts[i]!;
  const most = first + end - 1;
  if (total * most ** 4 >= Number.MAX_SAFE_INTEGER) return null;
  let [s1, s2, s3, s4] = [0, 0, 0, 0];
  for (let i = 0; i < end; i++) {
    const x = first + i;
    const first1 = counts[i]! * x;
    s1 += first1;
    s2 += first1 * x;
    s3 += first1 * x * x;
    s4 += first1 * x * x * x;
  }
  return [s1, s2, s3, s4];
}

/** Sums over the bins that hold one count each, in doubles where that is exact. */
function exactSumsOfWindow(counts: Uint32Array, first: number, end: number): PowerSums {
  const small = smallSumsOfWindow(counts, first, end);
  if (small) return small.map(BigInt) as PowerSums;
  const sums = noSums();
  for (let i = 0; i < end; i++) if (counts[i]! > 0) addPowers(sums, BigInt(first + i), BigInt(counts[i]!));
  return sums;
}

/** The value of the given rank (1 = least) of a cell's values; a bin wider than 1 answers its middle. */
export function valueOfRank(cells: CountCells, cell: number, rank: number): number {
  const { first, counts } = cells.window(cell);
  let seen = 0;
  for (let i = 0; i < counts.length; i++) {
    seen += counts[i]!;
    if (seen >= rank) return binMiddle(first + i);
  }
  throw new RangeError(`rank ${rank} of ${seen} values`);
}
