/** The file of a computed batch, or of a whole prefix as one batch: what the worker answered, as bytes. */
import { createHash } from 'node:crypto';
import { readFile } from 'node:fs/promises';
import type { BatchFailure } from '@/domain/jobs/job-inputs.ts';
import type { BlockPart, BlockShare } from '@/engine/statistics/blocks.ts';

/** What is kept of the replicates of one point. */
export interface PointContent {
  eventsPerReplicate: Float64Array;
  /** Passage by passage; Infinity where a replicate did not pass by the horizon. */
  passageTimes: Float64Array;
  /** Encoded EnsembleSummary. */
  summary: Uint8Array;
  traces: { replicate: number; values: Float64Array }[];
  blocks: BlockShare | null;
}

export interface BatchContent {
  firstReplicate: number;
  /** Complete at every point. */
  replicateCount: number;
  kernel: string;
  engineVersion: string;
  failure: BatchFailure | null;
  /** In order; none when no replicate is complete. */
  points: PointContent[];
}

interface PartHeader {
  firstReplicate: number;
  replicates: number;
  bytes: number;
}

interface PointHeader {
  passageTimes: number;
  summaryBytes: number;
  traces: { replicate: number; values: number }[];
  blocks: { leafDigestBytes: number; partLeaves: PartHeader[]; pieces: PartHeader[] } | null;
}

interface Header extends Omit<BatchContent, 'points'> {
  format: 'burette-batch-3';
  points: PointHeader[];
}

const bytesOf = (values: Float64Array): Uint8Array =>
  new Uint8Array(values.buffer, values.byteOffset, values.byteLength);

const partHeaders = (parts: BlockPart[]): PartHeader[] =>
  parts.map(({ bytes, ...part }) => ({ ...part, bytes: bytes.byteLength }));

const headerOf = ({ passageTimes, summary, traces, blocks }: PointContent): PointHeader => ({
  passageTimes: passageTimes.length,
  summaryBytes: summary.byteLength,
  traces: traces.map(({ replicate, values }) => ({ replicate, values: values.length })),
  blocks: blocks && {
    leafDigestBytes: blocks.leafDigests.byteLength,
    partLeaves: partHeaders(blocks.partLeaves),
    pieces: partHeaders(blocks.pieces),
  },
});

const partsOf = ({ eventsPerReplicate, passageTimes, summary, traces, blocks }: PointContent): Uint8Array[] => [
  bytesOf(eventsPerReplicate),
  bytesOf(passageTimes),
  summary,
  ...traces.map(({ values }) => bytesOf(values)),
  ...(blocks ? [blocks.leafDigests, ...[...blocks.partLeaves, ...blocks.pieces].map(({ bytes }) => bytes)] : []),
];

/** Header length (u32, little endian), header as JSON, then point by point: events per replicate, passage times, summary, traces, blocks. */
export function encodeBatch({ firstReplicate, replicateCount, kernel, engineVersion, failure, points }: BatchContent) {
  const header: Header = {
    format: 'burette-batch-3',
    firstReplicate,
    replicateCount,
    kernel,
    engineVersion,
    failure,
    points: points.map(headerOf),
  };
  const text = Buffer.from(JSON.stringify(header), 'utf8');
  const length = Buffer.alloc(4);
  length.writeUInt32LE(text.byteLength);
  return Buffer.concat([length, text, ...points.flatMap(partsOf)]);
}

export function decodeBatch(bytes: Uint8Array): BatchContent {
  const buffer = Buffer.from(bytes.buffer, bytes.byteOffset, bytes.byteLength);
  const headerBytes = buffer.readUInt32LE(0);
  const { format, points, ...batch } = JSON.parse(buffer.toString('utf8', 4, 4 + headerBytes)) as Header;
  if (format !== 'burette-batch-3') throw new Error('This is no batch file.');
  let at = 4 + headerBytes;
  const take = (length: number): Uint8Array => {
    if (at + length > buffer.byteLength) throw new Error('The batch file is shorter than its header says.');
    // A copy, since 8-byte values need an aligned start.
    const part = new Uint8Array(buffer.subarray(at, at + length));
    at += length;
    return part;
  };
  return { ...batch, points: points.map((header) => takePoint(header, batch.replicateCount, take)) };
}

function takePoint(header: PointHeader, replicates: number, take: (length: number) => Uint8Array): PointContent {
  const doubles = (count: number): Float64Array => new Float64Array(take(count * 8).buffer);
  const parts = (headers: PartHeader[]): BlockPart[] => headers.map((part) => ({ ...part, bytes: take(part.bytes) }));
  const eventsPerReplicate = doubles(replicates);
  const passageTimes = doubles(header.passageTimes);
  const summary = take(header.summaryBytes);
  const traces = header.traces.map(({ replicate, values }) => ({ replicate, values: doubles(values) }));
  const blocks = header.blocks && {
    leafDigests: take(header.blocks.leafDigestBytes),
    partLeaves: parts(header.blocks.partLeaves),
    pieces: parts(header.blocks.pieces),
  };
  return { eventsPerReplicate, passageTimes, summary, traces, blocks };
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
