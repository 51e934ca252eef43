/** Joins the shares of consecutive batches into the blocks of the whole prefix. */
import { joinedRecords } from './block-collector.ts';
import { BlockSums } from './block-sums.ts';
import {
  blockDigest,
  leafDigest,
  replicatesPerLeaf,
  rowsOf,
  type BlockPart,
  type BlockShare,
  type Records,
} from './blocks.ts';
import { decodeSummary, type Summary, type SummaryShape } from './summary.ts';

export interface Block {
  firstReplicate: number;
  replicates: number;
  digest: string;
  sums: BlockSums;
}

export class BlockMerger {
  readonly #shape: SummaryShape;
  readonly #blockReplicates: number;
  /** By leaf, counted from the first, whole ones only. */
  readonly #digests: Uint8Array[] = [];
  /** Of the last leaf, while it is not whole. */
  #partLeaf: { firstReplicate: number; summary: Summary; records: Records[] } | null = null;
  readonly #pieces: BlockPart[] = [];
  #block: { firstReplicate: number; sums: BlockSums };
  readonly #firstLeaf: number;
  #next: number;

  /**
   * `blockReplicates`: replicatesPerBlock of the whole prefix; Infinity to make one block of everything. `firstReplicate`, where a
   * leaf begins, is not 0 when blocks from within a prefix are run again.
   */
  constructor(shape: SummaryShape, blockReplicates: number, firstReplicate = 0) {
    this.#shape = shape;
    this.#blockReplicates = blockReplicates;
    this.#firstLeaf = firstReplicate / replicatesPerLeaf;
    this.#next = firstReplicate;
    this.#block = { firstReplicate, sums: new BlockSums(shape) };
  }

  /** Takes in the next batch of the prefix. Throws RangeError when it is another one or its share does not fit it. */
  add(batch: { firstReplicate: number; records: Records; share: BlockShare }): void {
    const { firstReplicate, records, share } = batch;
    for (const part of share.partLeaves) {
      const from = part.firstReplicate - firstReplicate;
      this.#addToLeaf(part, rowsOf(records, from, from + part.replicates));
    }
    let leaf = Math.ceil(firstReplicate / replicatesPerLeaf) - this.#firstLeaf;
    for (let at = 0; at < share.leafDigests.length; at += 32)
      this.#digests[leaf++] = share.leafDigests.slice(at, at + 32);
    for (const piece of share.pieces) this.#addPiece(piece);
    if (this.#next !== firstReplicate + records[0]!.length)
      throw new RangeError(`the sums end at replicate ${this.#next}, not with their batch`);
  }

  #addToLeaf(part: BlockPart, records: Records): void {
    const summary = decodeSummary(part.bytes);
    const leaf = (this.#partLeaf ??= { firstReplicate: part.firstReplicate, summary, records: [] });
    if (leaf.summary !== summary) leaf.summary.merge(summary);
    leaf.records.push(records);
    if (leaf.summary.replicates < replicatesPerLeaf) return;
    this.#digests[leaf.firstReplicate / replicatesPerLeaf - this.#firstLeaf] = digestOf(leaf);
    this.#partLeaf = null;
  }

  #addPiece({ firstReplicate, replicates, bytes }: BlockPart): void {
    if (firstReplicate !== this.#next) throw new RangeError(`replicate ${this.#next} was expected next`);
    if (
      Math.floor(this.#next / this.#blockReplicates) !==
      Math.floor((this.#next + replicates - 1) / this.#blockReplicates)
    )
      throw new RangeError(`the sums from replicate ${this.#next} reach into another block`);
    this.#block.sums.add(bytes);
    this.#next += replicates;
    if (this.#next % this.#blockReplicates === 0) this.#endBlock();
  }

  #endBlock(): void {
    const { firstReplicate, sums } = this.#block;
    const replicates = this.#next - firstReplicate;
    if (replicates === 0) return;
    this.#pieces.push({ firstReplicate, replicates, bytes: sums.encode() });
    this.#block = { firstReplicate: this.#next, sums: new BlockSums(this.#shape) };
  }

  /** The share of the whole prefix; nothing can be added after it. */
  share(): BlockShare {
    this.#endBlock();
    const leafDigests = new Uint8Array(32 * this.#digests.length);
    this.#digests.forEach((digest, i) => leafDigests.set(digest, 32 * i));
    const leaf = this.#partLeaf;
    const { replicates } = leaf?.summary ?? { replicates: 0 };
    const partLeaves = leaf ? [{ firstReplicate: leaf.firstReplicate, replicates, bytes: leaf.summary.encode() }] : [];
    return { leafDigests, partLeaves, pieces: this.#pieces };
  }
}

const digestOf = ({ summary, records }: { summary: Summary; records: Records[] }): Uint8Array =>
  leafDigest(summary.encode(), joinedRecords(records));

/** The blocks from a share that begins where a leaf does; sums are decoded as they are asked for. */
export function* blocksOf(prefix: {
  shape: SummaryShape;
  share: BlockShare;
  records: Records;
  firstReplicate?: number;
}): Iterable<Block> {
  const { shape, share, records, firstReplicate: start = 0 } = prefix;
  const [part] = share.partLeaves;
  const last = part ? [leafDigest(part.bytes, rowsOf(records, part.firstReplicate - start))] : [];
  const digests = new Uint8Array(share.leafDigests.length + 32 * last.length);
  digests.set(share.leafDigests);
  for (const digest of last) digests.set(digest, share.leafDigests.length);
  for (const { firstReplicate, replicates, bytes } of share.pieces) {
    const sums = new BlockSums(shape);
    sums.add(bytes);
    const [from, end] = [firstReplicate, firstReplicate + replicates].map(
      (n) => 32 * Math.ceil((n - start) / replicatesPerLeaf),
    );
    yield { firstReplicate, replicates, digest: blockDigest(digests.subarray(from, end)), sums };
  }
}
