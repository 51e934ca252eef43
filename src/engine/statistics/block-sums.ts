/** Exact sums of the first four powers of every observable at every grid time, for a part of an ensemble. */
import { CrossCells, type CrossSums } from './cross-cells.ts';
import { ByteReader, ByteWriter } from './byte-codec.ts';
import { addSums, noSums, type PowerSums } from './power-sums.ts';
import { realSumScale } from './real-cells.ts';
import type { Summary, SummaryShape } from './summary.ts';

const kinds = { small: 0, large: 1 } as const;

/** Observable by observable, then by grid time: four sums each; then those of the pairs. */
export function encodeSums(summary: Summary): Uint8Array {
  const writer = new ByteWriter();
  for (let observable = 0; observable < summary.observables.length; observable++)
    for (let gridPoint = 0; gridPoint < summary.gridPoints; gridPoint++) {
      const { kind, cell } = summary.cell(observable, gridPoint);
      const small = kind === 'count' ? summary.counts.smallSums(cell) : null;
      writer.byte(small ? kinds.small : kinds.large);
      if (small) for (const sum of small) writer.unsigned(sum);
      else
        for (const sum of kind === 'count' ? summary.counts.sums(cell) : summary.reals.sums(cell))
          writeLarge(writer, sum);
    }
  summary.cross.encode(writer);
  return writer.bytes();
}

/** Sums of real numbers are long and end in many zeros. */
function writeLarge(writer: ByteWriter, sum: bigint): void {
  const zeros = trailingZeros(sum);
  writer.unsigned(zeros);
  writer.big(sum >> BigInt(zeros));
}

const trailingZeros = (value: bigint): number => {
  if (value === 0n) return 0;
  let zeros = 0;
  while (BigInt.asUintN(64, value) === 0n) {
    value >>= 64n;
    zeros += 64;
  }
  while ((value & 1n) === 0n) {
    value >>= 1n;
    zeros++;
  }
  return zeros;
};

/** Sums that further parts are added to. */
export class BlockSums {
  readonly #shape: SummaryShape;
  readonly #cells: PowerSums[];
  readonly #cross: CrossCells;

  constructor(shape: SummaryShape) {
    this.#shape = shape;
    this.#cells = Array.from({ length: shape.observables.length * shape.gridPoints }, noSums);
    this.#cross = new CrossCells((shape.pairs ?? []).length * shape.gridPoints);
  }

  /** Adds what `encodeSums` wrote of another part. Throws RangeError on other bytes. */
  add(bytes: Uint8Array): void {
    const reader = new ByteReader(bytes);
    for (const cell of this.#cells) {
      const sum = reader.byte() === kinds.small ? () => BigInt(reader.unsigned()) : () => readLarge(reader);
      addSums(cell, [sum(), sum(), sum(), sum()]);
    }
    this.#cross.addEncoded(reader);
    if (!reader.atEnd) throw new RangeError('the sums have bytes left over');
  }

  /** Of a real observable in units of 2^-1074 (`scaleOf`). */
  sums(observable: number, gridPoint: number): PowerSums {
    return this.#cells[observable * this.#shape.gridPoints + gridPoint]!;
  }

  /** Of a pair, by its place in the shape. */
  crossSums(pair: number, gridPoint: number): CrossSums {
    return this.#cross.sums(pair * this.#shape.gridPoints + gridPoint);
  }

  encode(): Uint8Array {
    const writer = new ByteWriter();
    for (const sums of this.#cells) {
      const small = sums.every((sum) => sum >= 0n && sum <= BigInt(Number.MAX_SAFE_INTEGER));
      writer.byte(small ? kinds.small : kinds.large);
      for (const sum of sums) {
        if (small) writer.unsigned(Number(sum));
        else writeLarge(writer, sum);
      }
    }
    this.#cross.encode(writer);
    return writer.bytes();
  }
}

const readLarge = (reader: ByteReader): bigint => {
  const zeros = reader.unsigned();
  return reader.big() << BigInt(zeros);
};

/** Sums come in units of 2^-scale. */
export const scaleOf = (kind: 'count' | 'real'): bigint => (kind === 'count' ? 0n : realSumScale);

/** A sum as exact text: a whole number, or `m p-e` for m · 2^-e with odd m. */
export function sumText(sum: bigint, scale: bigint): string {
  const zeros = trailingZeros(sum);
  const left = Number(scale) - zeros;
  if (sum === 0n || left <= 0) return String(sum >> scale);
  return `${sum >> BigInt(zeros)}p-${left}`;
}

/** Reads what `sumText` wrote, in units of 2^-scale; null on other text. */
export function parseSum(text: string, scale: bigint): bigint | null {
  const match = /^(-?\d{1,2000})(?:p-(\d{1,4}))?$/.exec(text);
  if (!match) return null;
  const shift = scale - BigInt(match[2] ?? 0);
  return shift < 0n ? null : BigInt(match[1]!) << shift;
}
