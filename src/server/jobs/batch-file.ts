/** The file of a computed batch: what the worker answered, as bytes with a checksum kept in the database. */
import { readFile, writeFile } from 'node:fs/promises';
import type { BatchFailure } from '@/domain/jobs/job-inputs.ts';
import { jobFile, sha256Hex, writeDurably } from './job-folder.ts';

export interface BatchContent {
  firstReplicate: number;
  replicateCount: number;
  kernel: string;
  engineVersion: string;
  eventsPerReplicate: Float64Array;
  /** Encoded EnsembleSummary. */
  summary: Uint8Array;
  traces: { replicate: number; values: Float64Array }[];
  failure: BatchFailure | null;
}

interface Header {
  format: 'burette-batch-1';
  firstReplicate: number;
  replicateCount: number;
  kernel: string;
  engineVersion: string;
  failure: BatchFailure | null;
  summaryBytes: number;
  traces: { replicate: number; values: number }[];
}

const bytesOf = (values: Float64Array): Uint8Array =>
  new Uint8Array(values.buffer, values.byteOffset, values.byteLength);

/** Header length (u32, little endian), header as JSON, events per replicate, summary, traces. */
export function encodeBatch(content: BatchContent): Uint8Array {
  const header: Header = {
    format: 'burette-batch-1',
    firstReplicate: content.firstReplicate,
    replicateCount: content.replicateCount,
    kernel: content.kernel,
    engineVersion: content.engineVersion,
    failure: content.failure,
    summaryBytes: content.summary.byteLength,
    traces: content.traces.map(({ replicate, values }) => ({ replicate, values: values.length })),
  };
  const text = Buffer.from(JSON.stringify(header), 'utf8');
  const length = Buffer.alloc(4);
  length.writeUInt32LE(text.byteLength);
  return Buffer.concat([
    length,
    text,
    bytesOf(content.eventsPerReplicate),
    content.summary,
    ...content.traces.map(({ values }) => bytesOf(values)),
  ]);
}

export function decodeBatch(bytes: Uint8Array): BatchContent {
  const buffer = Buffer.from(bytes.buffer, bytes.byteOffset, bytes.byteLength);
  const headerBytes = buffer.readUInt32LE(0);
  const header = JSON.parse(buffer.toString('utf8', 4, 4 + headerBytes)) as Header;
  if (header.format !== 'burette-batch-1') throw new Error('This is no batch file.');
  let at = 4 + headerBytes;
  const take = (length: number): Uint8Array => {
    if (at + length > buffer.byteLength) throw new Error('The batch file is shorter than its header says.');
    // A copy, since 8-byte values need an aligned start.
    const part = new Uint8Array(buffer.subarray(at, at + length));
    at += length;
    return part;
  };
  const doubles = (count: number): Float64Array => new Float64Array(take(count * 8).buffer);
  const eventsPerReplicate = doubles(header.replicateCount);
  const summary = take(header.summaryBytes);
  const traces = header.traces.map(({ replicate, values }) => ({ replicate, values: doubles(values) }));
  const { firstReplicate, replicateCount, kernel, engineVersion, failure } = header;
  return { firstReplicate, replicateCount, kernel, engineVersion, failure, eventsPerReplicate, summary, traces };
}

/** Stores a batch durably under `name` in the job's folder; answers its SHA-256. */
export async function storeBatch(options: { jobId: string; name: string; content: BatchContent }): Promise<string> {
  const bytes = encodeBatch(options.content);
  await writeDurably(jobFile(options.jobId, options.name), (temporary) => writeFile(temporary, bytes));
  return sha256Hex(bytes);
}

/** The stored batch, or null when the file is missing or is not the one whose SHA-256 was recorded. */
export async function loadBatch(options: {
  jobId: string;
  name: string;
  sha256: string | null;
}): Promise<BatchContent | null> {
  const bytes = await readFile(jobFile(options.jobId, options.name)).catch((error: NodeJS.ErrnoException) => {
    if (error.code === 'ENOENT') return null;
    throw error;
  });
  if (!bytes || (options.sha256 !== null && sha256Hex(bytes) !== options.sha256)) return null;
  return decodeBatch(bytes);
}
