/** Joins a job's batches into its prefix and writes the prefix's file and the archive: what a worker thread does at the end. */
import { writeFile } from 'node:fs/promises';
import { asSummary } from '@/engine/statistics/statistics-of.ts';
import { recordsOf, replicatesPerBlock } from '@/engine/statistics/blocks.ts';
import { BlockMerger } from '@/engine/statistics/merge-blocks.ts';
import { sumCells } from '@/engine/statistics/summary.ts';
import { encodeBatch, readBatchFile, sha256Hex } from './batch-file.ts';
import { addBatch, asBatch, emptyEnsemble, recordsOfPoint, type Ensemble } from './ensemble.ts';
import type { ArchiveSubject, Results } from './subject.ts';
import { writeArchive } from './write-archive.ts';

export interface WriteResultsTask {
  /** The stored batches of the prefix, in order: with an earlier revision's prefix as the first. */
  batches: { file: string; sha256: string | null }[];
  /** Replicates of the prefix. */
  replicates: number;
  subject: ArchiveSubject;
  /** Provenance of the archive, as JSON text. */
  provenance: string;
  /** Where to write; the caller flushes and renames them. */
  prefixFile: string;
  archiveFile: string;
}

export type WriteResultsAnswer =
  | {
      kind: 'written';
      prefixSha256: string;
      archiveSha256: string;
      archiveBytes: number;
      resultsDigest: string;
    }
  /** Files that are missing or are not what was stored, by their place in `batches`: to be computed again. */
  | { kind: 'damaged'; places: number[] };

export async function writeResults(task: WriteResultsTask): Promise<WriteResultsAnswer> {
  const read = await readResults(task);
  if ('places' in read) return read;
  const prefix = encodeBatch(asBatch(read.ensemble, read.blocks));
  await writeFile(task.prefixFile, prefix);
  const archive = await writeArchive({
    file: task.archiveFile,
    subject: task.subject,
    results: read,
    provenance: task.provenance,
  });
  return {
    kind: 'written',
    prefixSha256: sha256Hex(prefix),
    archiveSha256: archive.sha256,
    archiveBytes: archive.bytes,
    resultsDigest: archive.resultsDigest,
  };
}

async function readResults(
  task: WriteResultsTask,
): Promise<Results | Extract<WriteResultsAnswer, { kind: 'damaged' }>> {
  const ensemble = emptyEnsemble();
  const places: number[] = [];
  let mergers: BlockMerger[] | null = null;
  for (const [place, { file, sha256 }] of task.batches.entries()) {
    const content = await readBatchFile(file, sha256);
    if (!content) places.push(place);
    // Those still to come are looked at, so that all damage is known at once.
    if (!content || places.length > 0) continue;
    addBatch(ensemble, content);
    mergers ??= mergersOf(ensemble, task.replicates);
    for (const [point, { blocks, ...records }] of content.points.entries()) {
      if (!blocks) throw new Error(`${file} tells nothing of the blocks.`);
      const { firstReplicate } = content;
      mergers[point]!.add({ firstReplicate, records: recordsOf(records), share: blocks });
    }
  }
  if (places.length > 0) return { kind: 'damaged', places };
  if (!mergers || ensemble.replicates !== task.replicates)
    throw new Error(`The batches hold ${ensemble.replicates} replicates, not ${task.replicates}.`);
  const points = ensemble.points.map((point) => {
    const [events, ...passages] = recordsOfPoint(point);
    return { ...point, events: [events!], passages: passages.map((times) => [times]) };
  });
  return { ensemble: { ...ensemble, points }, blocks: mergers.map((merger) => merger.share()) };
}

function mergersOf({ points }: Ensemble, replicates: number): BlockMerger[] {
  const { shape } = asSummary(points[0]!.summary);
  const size = replicatesPerBlock({ replicates, cells: sumCells(shape), points: points.length });
  return points.map(() => new BlockMerger(shape, size));
}
