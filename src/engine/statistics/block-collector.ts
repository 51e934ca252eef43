/** Collects a batch's share of the blocks while its groups of replicates come in. */
import {
  leafDigest,
  replicatesPerBlock,
  replicatesPerLeaf,
  type BlockPart,
  type BlockShare,
  type Records,
} from './blocks.ts';
import { encodeSums } from './block-sums.ts';
import { sumCells, Summary, type ReplicateGroup, type SummaryShape } from './summary.ts';

interface Part {
  firstReplicate: number;
  summary: Summary;
}

export class BlockCollector {
  /** The statistics of all replicates so far, up to the last end of a piece; complete after `share`. */
  readonly summary: Summary;
  readonly #shape: SummaryShape;
  readonly #cells: number;
  #next: number;
  #leaf: Part;
  #piece: Part;
  /** Of the leaf, in the pieces that came in. */
  #records: Records[] = [];
  readonly #passages: number;
  readonly #digests: Uint8Array[] = [];
  readonly #partLeaves: BlockPart[] = [];
  readonly #pieces: BlockPart[] = [];

  /** Of replicates from `firstReplicate` on, with so many first passages. */
  constructor(shape: SummaryShape, firstReplicate: number, passages: number) {
    this.#shape = shape;
    this.#passages = passages;
    this.#cells = sumCells(shape);
    this.#next = firstReplicate;
    this.summary = new Summary(shape);
    this.#leaf = { firstReplicate, summary: new Summary(shape) };
    this.#piece = { firstReplicate, summary: new Summary(shape) };
  }

  /** Takes in the next replicates. */
  add(group: ReplicateGroup): void {
    for (let from = 0; from < group.replicates;) {
      const count = Math.min(group.replicates - from, replicatesPerLeaf - (this.#next % replicatesPerLeaf));
      const events = group.events.slice(from, from + count);
      this.#leaf.summary.add({
        replicates: count,
        counts: group.counts.subarray(from),
        reals: group.reals.subarray(from),
        stride: group.stride,
        events,
      });
      this.#records.push([events, ...this.#passageTimes(group, from, count)]);
      this.#next += count;
      from += count;
      if (this.#next % replicatesPerLeaf === 0) this.#endLeaf();
      // A prefix that holds these replicates has blocks of at least this size, so no piece ever lies in two of them.
      if (this.#next % replicatesPerBlock({ replicates: this.#next, cells: this.#cells }) === 0) this.#endPiece();
    }
  }

  #passageTimes(group: ReplicateGroup, from: number, count: number): Records {
    const { passages = new Float64Array(0), stride } = group;
    return Array.from({ length: this.#passages }, (_, i) =>
      passages.slice(i * stride + from, i * stride + from + count),
    );
  }

  /** The share; nothing can be added after it. */
  share(): BlockShare {
    this.#endLeaf();
    this.#endPiece();
    const leafDigests = new Uint8Array(32 * this.#digests.length);
    this.#digests.forEach((digest, i) => leafDigests.set(digest, 32 * i));
    return { leafDigests, partLeaves: this.#partLeaves, pieces: this.#pieces };
  }

  #endLeaf(): void {
    const { firstReplicate, summary } = this.#leaf;
    const replicates = this.#next - firstReplicate;
    if (replicates === 0) return;
    const bytes = summary.encode();
    if (replicates === replicatesPerLeaf) this.#digests.push(leafDigest(bytes, joinedRecords(this.#records)));
    else this.#partLeaves.push({ firstReplicate, replicates, bytes });
    this.#records = [];
    // A piece of one leaf is that leaf.
    if (this.#piece.firstReplicate === firstReplicate) this.#piece.summary = summary;
    else this.#piece.summary.merge(summary);
    this.#leaf = { firstReplicate: this.#next, summary: new Summary(this.#shape) };
  }

  #endPiece(): void {
    const { firstReplicate, summary } = this.#piece;
    const replicates = this.#next - firstReplicate;
    if (replicates === 0) return;
    this.#pieces.push({ firstReplicate, replicates, bytes: encodeSums(summary) });
    this.summary.merge(summary);
    this.#piece = { firstReplicate: this.#next, summary: new Summary(this.#shape) };
  }
}

/** Records of consecutive replicates as one. */
export const joinedRecords = (pieces: Records[]): Records =>
  (pieces[0] ?? []).map((_, column) => joined(pieces.map((piece) => piece[column]!)));

/** The pieces one after the other; a single one is answered as it is. */
export function joined(pieces: Float64Array[]): Float64Array {
  if (pieces.length === 1) return pieces[0]!;
  const all = new Float64Array(pieces.reduce((sum, { length }) => sum + length, 0));
  let at = 0;
  for (const piece of pieces) {
    all.set(piece, at);
    at += piece.length;
  }
  return all;
}
