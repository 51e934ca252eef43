/**
 * Blocks: what lets anyone re-add and re-run part of an ensemble.
 *
 * The replicates of a point are cut into leaves of 256. A leaf's digest is taken of everything its replicates add to the
 * statistics; a block is a run of 2^k leaves, its digest is that of its leaves' digests one after the other, and with it stand
 * the block's exact sums. Leaves never depend on the number of replicates; how many make a block does (`replicatesPerBlock`).
 * A batch delivers whole leaves as digests, the leaves at its ends that it has only a part of as summaries, and sums for
 * pieces that lie inside one block each: so any cut into batches gives the same blocks.
 */
import { sha256 } from './sha256.ts';

/** Replicates of a leaf; the last leaf of an ensemble may have fewer. */
export const replicatesPerLeaf = 256;
/** An ensemble has at most this many blocks in all of its points together, unless it has more points. */
const blocksMost = 256;
/** And at most about this many rows of sums. */
const sumRowsMost = 2 ** 19;

/**
 * Replicates of each block but the last: 256 · 2^k with the least k that keeps blocks and rows of sums within bounds. `cells`:
 * (observables + pairs) × grid times. Grows with `replicates`, so what is summed for a prefix can be re-added for a longer one.
 */
export function replicatesPerBlock(options: { replicates: number; cells: number; points?: number }): number {
  const { replicates, cells, points = 1 } = options;
  let size = replicatesPerLeaf;
  for (; size < replicates; size *= 2) {
    const blocks = points * Math.ceil(replicates / size);
    if (blocks <= blocksMost && blocks * cells <= sumRowsMost) break;
  }
  return size;
}

/** A part of a batch that begins at `firstReplicate`, with the bytes that concern it. */
export interface BlockPart {
  firstReplicate: number;
  replicates: number;
  bytes: Uint8Array;
}

/** What a batch knows of the blocks. */
export interface BlockShare {
  /** Digests of the whole leaves in the batch, in order, 32 bytes each. */
  leafDigests: Uint8Array;
  /** Encoded summaries of the leaves at the batch's ends that are not whole. */
  partLeaves: BlockPart[];
  /** Encoded sums (block-sums.ts) of pieces that together are the batch. */
  pieces: BlockPart[];
}

/**
 * What is known of each replicate by itself, column by column: its events, then the time of each first passage (Infinity where
 * it did not pass by the horizon).
 */
export type Records = Float64Array[];

export const recordsOf = (batch: { eventsPerReplicate: Float64Array; passageTimes: Float64Array }): Records => {
  const { eventsPerReplicate, passageTimes } = batch;
  const { length } = eventsPerReplicate;
  const passages = length === 0 ? 0 : passageTimes.length / length;
  const times = Array.from({ length: passages }, (_, i) => passageTimes.subarray(i * length, (i + 1) * length));
  return [eventsPerReplicate, ...times];
};

/** Rows `from` … `end` − 1 of each column. */
export const rowsOf = (records: Records, from: number, end?: number): Records =>
  records.map((column) => column.subarray(from, end));

/** The digest of a leaf: SHA-256 of its encoded summary, then its records column by column, as doubles with the least byte first. */
export const leafDigest = (summary: Uint8Array, records: Records): Uint8Array =>
  sha256(summary, ...records.map(doublesAsBytes));

/** The digest of a block from those of its leaves, as hexadecimal digits. */
export const blockDigest = (leafDigests: Uint8Array): string =>
  Array.from(sha256(leafDigests), (byte) => byte.toString(16).padStart(2, '0')).join('');

function doublesAsBytes(values: Float64Array): Uint8Array {
  const view = new DataView(new ArrayBuffer(values.length * 8));
  values.forEach((value, i) => view.setFloat64(8 * i, value, true));
  return new Uint8Array(view.buffer);
}
