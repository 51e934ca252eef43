/**
 * The statistics of a set of replicates of one point: exact, so that merging them in any grouping and order gives the same bytes.
 * Memory grows with grid points × observables × the spread of their values, never with the number of replicates.
 */
import type { EnsembleSummary } from '../ensemble.ts';
import { ByteReader, ByteWriter } from './byte-codec.ts';
import { CountCells } from './count-cells.ts';
import { CrossCells } from './cross-cells.ts';
import { RealCells } from './real-cells.ts';

const magic = 'BUS';
const formatVersion = 1;
/** With the sums of pairs behind the rest. */
const formatWithPairs = 2;

export interface SummaryShape {
  /** In order of the network's observables. */
  observables: { id: string; kind: 'count' | 'real' }[];
  gridPoints: number;
  /** Pairs of counts whose products are summed, by their places among the observables; none when left out. */
  pairs?: [number, number][];
}

/** How many groups of sums a summary of this shape has. */
export const sumCells = ({ observables, gridPoints, pairs = [] }: SummaryShape): number =>
  (observables.length + pairs.length) * gridPoints;

/** The results of a group of replicates, cell by cell: cell = grid point · observables of the kind + position in the kind. */
export interface ReplicateGroup {
  replicates: number;
  counts: Int32Array;
  reals: Float64Array;
  /** Numbers from one cell to the next in `counts` and `reals`. */
  stride: number;
  /** Firings of each replicate. */
  events: Float64Array;
  /** Times of first passage, [passage][replicate] by `stride`; none when left out. */
  passages?: Float64Array;
}

export class Summary implements EnsembleSummary {
  replicates = 0;
  readonly observables: string[];
  readonly gridPoints: number;
  readonly counts: CountCells;
  readonly reals: RealCells;
  /** Pair by pair, then by grid point. */
  readonly cross: CrossCells;
  /** Exact Σ and Σ² of the firings per replicate. */
  eventSum = 0n;
  eventSquareSum = 0n;
  readonly #places: { kind: 'count' | 'real'; position: number }[] = [];
  readonly #perPoint = { count: 0, real: 0 };

  constructor(readonly shape: SummaryShape) {
    this.observables = shape.observables.map(({ id }) => id);
    this.gridPoints = shape.gridPoints;
    for (const { kind } of shape.observables) this.#places.push({ kind, position: this.#perPoint[kind]++ });
    this.counts = new CountCells(this.#perPoint.count * shape.gridPoints);
    this.reals = new RealCells(this.#perPoint.real * shape.gridPoints);
    if (shape.pairs?.some((pair) => pair.some((observable) => this.#places[observable]?.kind !== 'count')))
      throw new RangeError('pairs are of counts');
    this.cross = new CrossCells((shape.pairs ?? []).length * shape.gridPoints);
  }

  add(group: ReplicateGroup): void {
    this.replicates += group.replicates;
    this.counts.add(group.counts, group.stride, group.replicates);
    this.reals.add(group.reals, group.stride, group.replicates);
    this.#addPairs(group);
    for (let i = 0; i < group.replicates; i++) {
      const events = BigInt(group.events[i]!);
      this.eventSum += events;
      this.eventSquareSum += events * events;
    }
  }

  #addPairs({ counts, stride, replicates }: ReplicateGroup): void {
    for (const [place, [first, second]] of (this.shape.pairs ?? []).entries())
      for (let point = 0; point < this.gridPoints; point++) {
        const [x, y] = [this.cell(first, point).cell, this.cell(second, point).cell];
        this.cross.add(place * this.gridPoints + point, counts, x * stride, y * stride, replicates);
      }
  }

  /** Where an observable's values at a grid point are: a cell of `counts` or of `reals`. Throws RangeError outside. */
  cell(observable: number, gridPoint: number): { kind: 'count' | 'real'; cell: number } {
    const place = this.#places[observable];
    if (!place || !Number.isInteger(gridPoint) || gridPoint < 0 || gridPoint >= this.gridPoints)
      throw new RangeError(`no observable ${observable} at grid point ${gridPoint}`);
    return { kind: place.kind, cell: gridPoint * this.#perPoint[place.kind] + place.position };
  }

  /** Takes in another set of replicates of the same point; the sets must not overlap. Throws when the shapes differ. */
  merge(other: EnsembleSummary): void {
    if (!(other instanceof Summary) || JSON.stringify(other.shape) !== JSON.stringify(this.shape))
      throw new TypeError('summaries of different observables or grids cannot be merged');
    this.replicates += other.replicates;
    this.counts.merge(other.counts);
    this.reals.merge(other.reals);
    this.cross.merge(other.cross);
    this.eventSum += other.eventSum;
    this.eventSquareSum += other.eventSquareSum;
  }

  encode(): Uint8Array {
    const writer = new ByteWriter();
    writer.text(magic);
    const { pairs = [] } = this.shape;
    writer.unsigned(pairs.length > 0 ? formatWithPairs : formatVersion);
    writer.unsigned(this.replicates);
    writer.unsigned(this.gridPoints);
    writer.unsigned(this.shape.observables.length);
    for (const { id, kind } of this.shape.observables) {
      writer.text(id);
      writer.byte(kind === 'count' ? 0 : 1);
    }
    writer.big(this.eventSum);
    writer.big(this.eventSquareSum);
    this.counts.encode(writer);
    this.reals.encode(writer);
    if (pairs.length > 0) {
      writer.unsigned(pairs.length);
      for (const pair of pairs) for (const observable of pair) writer.unsigned(observable);
      this.cross.encode(writer);
    }
    return writer.bytes();
  }
}

/** Reads an encoded summary. Throws RangeError on bytes that are none, cut short or of another version. */
export function decodeSummary(bytes: Uint8Array): Summary {
  const reader = new ByteReader(bytes);
  if (reader.text() !== magic) throw new RangeError('these bytes are not a summary');
  const version = reader.unsigned();
  if (version !== formatVersion && version !== formatWithPairs)
    throw new RangeError(`summary format ${version} is not known`);
  const replicates = reader.unsigned();
  const gridPoints = reader.unsigned();
  const observables = Array.from({ length: reader.unsigned() }, () => {
    const id = reader.text();
    return { id, kind: reader.byte() === 0 ? ('count' as const) : ('real' as const) };
  });
  const plain = new Summary({ observables, gridPoints });
  const eventSums = [reader.big(), reader.big()] as const;
  plain.counts.decode(reader);
  plain.reals.decode(reader);
  const summary = version === formatWithPairs ? withPairs(plain, reader) : plain;
  summary.replicates = replicates;
  [summary.eventSum, summary.eventSquareSum] = eventSums;
  if (!reader.atEnd) throw new RangeError('the summary has bytes left over');
  return summary;
}

function withPairs(plain: Summary, reader: ByteReader): Summary {
  const pairs = Array.from({ length: reader.unsigned() }, (): [number, number] => [
    reader.unsigned(),
    reader.unsigned(),
  ]);
  const summary = new Summary({ ...plain.shape, pairs });
  summary.counts.merge(plain.counts);
  summary.reals.merge(plain.reals);
  summary.cross.addEncoded(reader);
  return summary;
}
