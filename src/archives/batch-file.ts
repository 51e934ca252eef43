/** The file of a computed batch, or of a whole prefix as one batch: what the worker answered, as bytes. */
import { createHash } from 'node:crypto';
import { readFile } from 'node:fs/promises';
import type { BatchFailure } from '@/domain/jobs/job-inputs.ts';
import type { BlockPart, BlockShare } from '@/engine/statistics/blocks.ts';

export interface BatchContent {
  firstReplicate: number;
  replicateCount: number;
  kernel: string;
  engineVersion: string;
  eventsPerReplicate: Float64Array;
  /** Passage by passage; Infinity where a replicate did not pass by the horizon. */
  passageTimes: Float64Array;
  /** Encoded EnsembleSummary. */
  summary: Uint8Array;
  traces: { replicate: number; values: Float64Array }[];
  blocks: BlockShare | null;
  failure: BatchFailure | null;
}

interface PartHeader {
  firstReplicate: number;
  replicates: number;
  bytes: number;
}

interface Header {
  format: 'burette-batch-2';
  firstReplicate: number;
  replicateCount: number;
  kernel: string;
  engineVersion: string;
  failure: BatchFailure | null;
  passageTimes: number;
  summaryBytes: number;
  traces: { replicate: number; values: number }[];
  blocks: { leafDigestBytes: number; partLeaves: PartHeader[]; pieces: PartHeader[] } | null;
}

const bytesOf = (values: Float64Array): Uint8Array =>
  new Uint8Array(values.buffer, values.byteOffset, values.byteLength);

const partHeaders = (parts: BlockPart[]): PartHeader[] =>
  parts.map(({ bytes, ...part }) => ({ ...part, bytes: bytes.byteLength }));

/** Header length (u32, little endian), header as JSON, events per replicate, passage times, summary, traces, blocks. */
export function encodeBatch(content: BatchContent): Uint8Array {
  const { blocks } = content;
  const header: Header = {
    format: 'burette-batch-2',
    firstReplicate: content.firstReplicate,
    replicateCount: content.replicateCount,
    kernel: content.kernel,
    engineVersion: content.engineVersion,
    failure: content.failure,
    passageTimes: content.passageTimes.length,
    summaryBytes: content.summary.byteLength,
    traces: content.traces.map(({ replicate, values }) => ({ replicate, values: values.length })),
    blocks: blocks && {
      leafDigestBytes: blocks.leafDigests.byteLength,
      partLeaves: partHeaders(blocks.partLeaves),
      pieces: partHeaders(blocks.pieces),
    },
  };
  const text = Buffer.from(JSON.stringify(header), 'utf8');
  const length = Buffer.alloc(4);
  length.writeUInt32LE(text.byteLength);
  return Buffer.concat([
    length,
    text,
    bytesOf(content.eventsPerReplicate),
    bytesOf(content.passageTimes),
    content.summary,
    ...content.traces.map(({ values }) => bytesOf(values)),
    ...(blocks ? [blocks.leafDigests, ...[...blocks.partLeaves, ...blocks.pieces].map(({ bytes }) => bytes)] : []),
  ]);
}

export function decodeBatch(bytes: Uint8Array): BatchContent {
  const buffer = Buffer.from(bytes.buffer, bytes.byteOffset, bytes.byteLength);
  const headerBytes = buffer.readUInt32LE(0);
  const header = JSON.parse(buffer.toString('utf8', 4, 4 + headerBytes)) as Header;
  if (header.format !== 'burette-batch-2') throw new Error('This is no batch file.');
  let at = 4 + headerBytes;
  const take = (length: number): Uint8Array => {
    if (at + length > buffer.byteLength) throw new Error('The batch file is shorter than its header says.');
    // A copy, since 8-byte values need an aligned start.
    const part = new Uint8Array(buffer.subarray(at, at + length));
    at += length;
    return part;
  };
  const doubles = (count: number): Float64Array => new Float64Array(take(count * 8).buffer);
  const parts = (headers: PartHeader[]): BlockPart[] => headers.map((part) => ({ ...part, bytes: take(part.bytes) }));
  const eventsPerReplicate = doubles(header.replicateCount);
  const passageTimes = doubles(header.passageTimes);
  const summary = take(header.summaryBytes);
  const traces = header.traces.map(({ replicate, values }) => ({ replicate, values: doubles(values) }));
  const blocks = header.blocks && {
    leafDigests: take(header.blocks.leafDigestBytes),
    partLeaves: parts(header.blocks.partLeaves),
    pieces: parts(header.blocks.pieces),
  };
  const { firstReplicate, replicateCount, kernel, engineVersion, failure } = header;
  return {
    firstReplicate,
    replicateCount,
    kernel,
    engineVersion,
    failure,
    eventsPerReplicate,
    passageTimes,
    summary,
    traces,
    blocks,
  };
}

/** The stored batch, or null when the file is missing or is not the one whose SHA-256 was recorded. */
export async function readBatchFile(file: string, sha256: string | null): Promise<BatchContent | null> {
  const bytes = await readFile(file).catch((error: NodeJS.ErrnoException) => {
    if (error.code === 'ENOENT') return null;
    throw error;
  });
  if (!bytes || (sha256 !== null && sha256Hex(bytes) !== sha256)) return null;
  return decodeBatch(bytes);
}

export const sha256Hex = (bytes: Uint8Array | string): string => createHash('sha256').update(bytes).digest('hex');
