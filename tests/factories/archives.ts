/** Archives made in a test without a server: run, join, write; and opened, altered and closed again with sound checksums. */
import { writeFile } from 'node:fs/promises';
import path from 'node:path';
import { unzipSync, zipSync } from 'fflate';
import { encodeBatch, sha256Hex } from '@/archives/batch-file.ts';
import { jobTask } from '@/archives/job-task.ts';
import type { ArchiveSubject } from '@/archives/subject.ts';
import { digestOf } from '@/archives/write-archive.ts';
import { writeResults, type WriteResultsAnswer, type WriteResultsTask } from '@/archives/write-results.ts';
import type { NetworkDocument } from '@/domain/network/document.ts';
import { networksOf } from '@/domain/jobs/networks-of.ts';
import type { Sweep } from '@/domain/jobs/sweep.ts';
import { engineVersion } from '@/engine/engine-version.ts';
import { eventsPerCycle, runPoints } from '@/engine/run-points.ts';

/** Births and deaths, a second species that only grows, and a named quantity that is no whole number. */
export const archivedNetwork: NetworkDocument = {
  timeUnit: 'min',
  species: [
    { id: 'X', name: 'Free ligand', initialCount: 5 },
    { id: 'Y', initialCount: 0 },
  ],
  parameters: [
    { id: 'birth', value: 20 },
    { id: 'death', value: 1 },
  ],
  reactions: [
    { id: 'arrive', equation: '∅ → X', rateLaw: { kind: 'massAction', constant: 'birth' } },
    { id: 'leave', equation: 'X → Y', rateLaw: { kind: 'massAction', constant: 'death' } },
  ],
  observables: [{ id: 'share', expression: 'X / (X + Y + 1)' }],
};

export interface MadeArchive {
  task: WriteResultsTask;
  answer: Extract<WriteResultsAnswer, { kind: 'written' }>;
}

export async function makeArchive(options: {
  folder: string;
  replicates: number;
  document?: NetworkDocument;
  batchSizes?: number[];
  keptTraces?: number;
  gridIntervals?: number;
  sweep?: Sweep;
  correlations?: string[];
}): Promise<MadeArchive> {
  const { folder, replicates, document = archivedNetwork, batchSizes = [replicates] } = options;
  const seed = '20261201';
  const inputs: ArchiveSubject['job']['inputs'] = {
    replicates,
    horizon: 4,
    gridIntervals: options.gridIntervals ?? 8,
    method: 'exact',
    seed,
    lane: 'steady',
    overrides: {},
    keptTraces: options.keptTraces ?? 4,
    passages: [{ observable: 'Y', direction: 'rises_to', threshold: 12 }],
    eventBudgetPerReplicate: 1_000_000,
    ...(options.sweep ? { sweep: options.sweep } : {}),
    ...(options.correlations ? { correlations: options.correlations } : {}),
  };
  const resolved = networksOf(document, inputs);
  if (!resolved.ok) throw new Error(resolved.problems[0]?.message);
  const batches: WriteResultsTask['batches'] = [];
  let events = 0;
  for (let firstReplicate = 0; firstReplicate < replicates;) {
    const replicateCount = Math.min(batchSizes[batches.length % batchSizes.length]!, replicates - firstReplicate);
    const range = { firstReplicate, replicateCount };
    const result = await runPoints(jobTask({ inputs, seed, networks: resolved.networks, ...range }));
    const points = result.points.map((point) => ({ ...point, summary: point.summary.encode() }));
    const bytes = encodeBatch({ ...result, engineVersion, points });
    const file = path.join(folder, `${firstReplicate}-${replicateCount}.batch`);
    await writeFile(file, bytes);
    batches.push({ file, sha256: sha256Hex(bytes) });
    events += eventsPerCycle(result.points).reduce((sum, value) => sum + value, 0);
    firstReplicate += replicateCount;
  }
  const task: WriteResultsTask = {
    batches,
    replicates,
    subject: {
      job: {
        name: 'Ligand turnover',
        seed,
        inputs,
        ending: { state: 'done', reason: 'replicates_reached', detail: 'All replicates are complete.', failure: null },
        events,
        replicatesPlanned: replicates,
      },
      model: { name: 'Turnover' },
      version: { number: 1, contentHash: sha256Hex(JSON.stringify(document)), document },
      revision: 1,
      finishedAt: '2026-12-01T09:30:00.000Z',
    },
    provenance: '{}\n',
    prefixFile: path.join(folder, 'prefix.batch'),
    archiveFile: path.join(folder, `archive-${batchSizes.join('-')}.zip`),
  };
  const answer = await writeResults(task);
  if (answer.kind !== 'written') throw new Error('The batches were damaged.');
  return { task, answer };
}

export type Files = ReturnType<typeof unzipSync>;

export const textOf = (bytes: Uint8Array | undefined): string => new TextDecoder().decode(bytes);
export const bytesOf = (text: string) => new Uint8Array(new TextEncoder().encode(text));

/** The files of a zip, altered, with every checksum and the digest of the results made to fit: a careful forger's archive. */
export function forged(zip: Uint8Array, alter: (files: Files) => void): Uint8Array {
  const files = unzipSync(zip);
  alter(files);
  const entries = (prefix: string) =>
    Object.entries(files)
      .filter(([name]) => name.startsWith(prefix) && name !== 'SHA256SUMS')
      .map(([name, bytes]) => ({ path: name, sha256: sha256Hex(bytes), bytes: bytes.length }));
  const job = JSON.parse(textOf(files['job.json'])) as object;
  files['job.json'] = bytesOf(JSON.stringify({ ...job, resultsDigest: digestOf(entries('results/')) }));
  const lines = entries('').map(({ path: name, sha256 }) => `${sha256}  ${name}\n`);
  files['SHA256SUMS'] = bytesOf(lines.sort().join(''));
  return zipSync(files);
}
