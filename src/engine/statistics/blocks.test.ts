/** Blocks: the same whatever the batches, and in agreement with sums and digests worked out by other means. */
import { createHash } from 'node:crypto';
import { describe, expect, it } from 'vitest';
import type { BatchTask } from '../ensemble.ts';
import { runBatch } from '../run-batch.ts';
import { batchTask } from '@tests/factories/batch-tasks.ts';
import { twoStageExpression } from '@tests/factories/networks.ts';
import { joinedRecords } from './block-collector.ts';
import { parseSum, sumText } from './block-sums.ts';
import { blockDigest, leafDigest, recordsOf, replicatesPerBlock, type Records } from './blocks.ts';
import { blocksOf, BlockMerger } from './merge-blocks.ts';
import { sha256 } from './sha256.ts';
import { asSummary } from './statistics-of.ts';

const hex = (bytes: Uint8Array): string => Buffer.from(bytes).toString('hex');

describe('SHA-256', () => {
  it('agrees with OpenSSL’s (node:crypto) at every length round a block’s end, in one part or in two', () => {
    for (const length of [0, 1, 3, 54, 55, 56, 57, 63, 64, 65, 119, 120, 1000, 100_000]) {
      const bytes = Uint8Array.from({ length }, (_, i) => (i * 131 + 7) % 256);
      const expected = createHash('sha256').update(bytes).digest('hex');
      expect(hex(sha256(bytes))).toBe(expected);
      expect(hex(sha256(bytes.subarray(0, length >> 1), bytes.subarray(length >> 1)))).toBe(expected);
    }
  });
  it('gives the standard’s example (FIPS 180-2, appendix B.1)', () => {
    expect(hex(sha256(new TextEncoder().encode('abc')))).toBe(
      'ba7816bf8f01cfea414140de5dae2223b00361a396177a9cb410ff61f20015ad',
    );
  });
});

describe('the size of a block', () => {
  it('is 256 · 2^k, grows with the prefix, and keeps the number of blocks and of sums within bounds', () => {
    for (const cells of [1, 804, 50_000])
      for (const points of [1, 12]) {
        let before = 256;
        for (const replicates of [1, 255, 257, 10_000, 65_536, 65_537, 1_000_000, 10_000_000]) {
          const size = replicatesPerBlock({ replicates, cells, points });
          expect(Number.isInteger(Math.log2(size / 256))).toBe(true);
          expect(size).toBeGreaterThanOrEqual(before);
          before = size;
          const blocks = points * Math.ceil(replicates / size);
          expect(blocks === points || (blocks <= 256 && blocks * cells <= 2 ** 19)).toBe(true);
        }
      }
    expect(replicatesPerBlock({ replicates: 65_536, cells: 804 })).toBe(256);
    expect(replicatesPerBlock({ replicates: 1_000_000, cells: 804 })).toBe(4096);
  });
});

describe('a sum as text', () => {
  it('is read back exactly, whole numbers and fractions, and other text is not read', () => {
    const scale = 1074n;
    const values = [0n, 1n << 1074n, -5n << 1074n, 3n, (12_345n << 1074n) + (1n << 1070n), 7n << 1073n];
    for (const value of values) expect(parseSum(sumText(value, scale), scale)).toBe(value);
    expect(sumText(7n << 1073n, scale)).toBe('7p-1');
    expect(sumText(42n, 0n)).toBe('42');
    for (const text of ['', '1.5', '1e3', '1p-1075', 'p-1', '0x10']) expect(parseSum(text, scale)).toBeNull();
  });
});

const total = 1_300;
/** Smaller than the rule’s bound would ever need here, so that a small test has several blocks of several leaves. */
const blockReplicates = 512;

async function blocksInBatches(task: BatchTask, sizes: number[]) {
  const first = await runBatch({ ...task, replicateCount: 1 });
  const { shape } = asSummary(first.summary);
  const merger = new BlockMerger(shape, blockReplicates);
  const records: Records[] = [];
  for (let firstReplicate = 0, i = 0; firstReplicate < total; i++) {
    const replicateCount = Math.min(sizes[i % sizes.length]!, total - firstReplicate);
    const result = await runBatch({ ...task, firstReplicate, replicateCount, blocks: true });
    merger.add({ firstReplicate, records: recordsOf(result), share: result.blocks! });
    records.push(recordsOf(result));
    firstReplicate += replicateCount;
  }
  const share = merger.share();
  const blocks = [...blocksOf({ shape, share, records: joinedRecords(records) })];
  return {
    share,
    blocks: blocks.map(({ sums, ...block }) => ({ ...block, sums: hex(sums.encode()) })),
    sumsOf: blocks.map(({ sums }) => sums),
  };
}

describe('blocks', () => {
  const passages = [{ observable: 1, direction: 'rises_to' as const, threshold: 3 }];
  const task = batchTask(twoStageExpression(), { horizon: 3, gridIntervals: 4, passages });

  it('are the same for batches of 1, of 7, of 1000, and for mixed ones', async () => {
    const whole = await blocksInBatches(task, [total]);
    expect(whole.blocks.map(({ replicates }) => replicates)).toEqual([512, 512, 276]);
    for (const sizes of [[1], [7], [1000], [256], [3, 512, 255, 2]]) {
      const cut = await blocksInBatches(task, sizes);
      expect(cut.blocks).toEqual(whole.blocks);
      expect(cut.share).toEqual(whole.share);
    }
  });

  it('hold the sums of their replicates’ own values, and digests that another SHA-256 gives too', async () => {
    const { blocks, sumsOf } = await blocksInBatches(task, [total]);
    const block = blocks[1]!;
    const kept = { ...task, firstReplicate: 512, replicateCount: 512, keptTraces: total };
    const { traces, summary } = await runBatch(kept);
    const points = task.gridIntervals + 1;
    asSummary(summary).observables.forEach((_, observable) => {
      for (let i = 0; i < points; i++) {
        const values = traces.map(({ values }) => BigInt(values[observable * points + i]!));
        const power = (exponent: bigint) => values.reduce((sum, value) => sum + value ** exponent, 0n);
        expect(sumsOf[1]!.sums(observable, i)).toEqual([power(1n), power(2n), power(3n), power(4n)]);
      }
    });
    const leaves = await Promise.all(
      [512, 768].map(async (firstReplicate) => {
        const leaf = await runBatch({ ...task, firstReplicate, replicateCount: 256 });
        const events = Buffer.alloc(256 * 8);
        leaf.eventsPerReplicate.forEach((value, i) => events.writeDoubleLE(value, 8 * i));
        const passed = Buffer.alloc(256 * 8);
        leaf.passageTimes.forEach((time, i) => passed.writeDoubleLE(time, 8 * i));
        return createHash('sha256').update(leaf.summary.encode()).update(events).update(passed).digest();
      }),
    );
    expect(createHash('sha256').update(Buffer.concat(leaves)).digest('hex')).toBe(block.digest);
  });

  it('leave the statistics as they are without blocks', async () => {
    const [plain, withBlocks] = await Promise.all(
      [false, true].map((blocks) => runBatch({ ...task, firstReplicate: 100, replicateCount: 700, blocks })),
    );
    expect(hex(withBlocks!.summary.encode())).toBe(hex(plain!.summary.encode()));
    expect(plain!.blocks).toBeNull();
  });

  it('notice a single other event count', () => {
    const summary = new Uint8Array([1, 2, 3]);
    const [a, b] = [Float64Array.of(4, 5), Float64Array.of(4, 6)].map((events) => leafDigest(summary, [events]));
    expect(blockDigest(a!)).not.toBe(blockDigest(b!));
  });
});
