/** Builds the archive of a job's delivered prefix: a deterministic zip, streamed to its file, that is a valid OMEX. */
import { createHash } from 'node:crypto';
import { Batch, Segment, type Job } from '@db/models/jobs.ts';
import { ModelVersion, NetworkModel } from '@db/models/models.ts';
import { omexFormats, writeManifest } from '@/formats/omex/write-manifest.ts';
import { writeSbml } from '@/formats/sbml/write-sbml.ts';
import { ZipWriter, type WrittenEntry } from '@/formats/zip/zip-writer.ts';
import { nowText } from '../clock.ts';
import { archiveFileName, jobFile, writeDurably } from '../jobs/job-folder.ts';
import type { PrefixEnsemble } from '../jobs/prefix-ensemble.ts';
import { jobJson, provenanceJson, readmeText, type ArchiveSubject } from './archive-texts.ts';
import { csvPieces, resultTables } from './result-tables.ts';

export interface BuiltArchive {
  sha256: string;
  bytes: number;
  /** SHA-256 over names and checksums of the files under results/: equal for equal jobs, whatever the batches were. */
  resultsDigest: string;
}

export async function buildArchive(options: {
  job: Job;
  ensemble: PrefixEnsemble;
  revision: number;
}): Promise<BuiltArchive> {
  const { job, revision } = options;
  const [model, version, segments, batches] = await Promise.all([
    NetworkModel.findByPk(job.modelId),
    ModelVersion.findByPk(job.modelVersionId),
    Segment.findAll({ where: { jobId: job.id }, order: [['ordinal', 'ASC']] }),
    Batch.findAll({ where: { jobId: job.id }, order: [['ordinal', 'ASC']] }),
  ]);
  const subject: ArchiveSubject = { ...options, model: model!, version: version! };
  let built: BuiltArchive | null = null;
  await writeDurably(jobFile(job.id, archiveFileName(revision)), async (temporary) => {
    built = await write(temporary, subject, provenanceJson(subject, segments, batches, nowText()));
  });
  return built!;
}

async function write(file: string, subject: ArchiveSubject, provenance: string): Promise<BuiltArchive> {
  const { job, model, version, ensemble } = subject;
  const tables = resultTables({ inputs: job.inputs, ensemble });
  const paths = ['job.json', 'provenance.json', 'model.xml', 'model.json', ...tables.map(({ path }) => path)];
  const zip = await ZipWriter.create(file);
  const written: WrittenEntry[] = [];
  const add = async (path: string, pieces: Iterable<string>) => void written.push(await zip.add(path, pieces));

  await add('README.txt', [readmeText(subject, paths)]);
  await add('manifest.xml', [writeManifest([...paths, 'README.txt', 'SHA256SUMS'].map(manifestEntry))]);
  await add('provenance.json', [provenance]);
  await add('model.xml', [writeSbml(version.document, { modelId: 'model', name: model.name })]);
  await add('model.json', [JSON.stringify(version.document)]);
  for (const { path, rows } of tables) await add(path, csvPieces(rows()));
  const resultsDigest = digestOf(written.filter(({ path }) => path.startsWith('results/')));
  await add('job.json', [jobJson(subject, resultsDigest)]);
  await zip.add('SHA256SUMS', sumLines(written));
  return { ...(await zip.end()), resultsDigest };
}

const byPath = (a: WrittenEntry, b: WrittenEntry): number => (a.path < b.path ? -1 : a.path > b.path ? 1 : 0);

/** As sha256sum writes and checks it, sorted by path. */
const sumLines = (entries: WrittenEntry[]): string[] =>
  [...entries].sort(byPath).map(({ sha256, path }) => `${sha256}  ${path}\n`);

export const digestOf = (entries: WrittenEntry[]): string =>
  createHash('sha256').update(sumLines(entries).join('')).digest('hex');

function manifestEntry(path: string) {
  const extension = path.split('.').at(-1);
  if (path === 'model.xml') return { path, format: omexFormats.sbml, master: true };
  const format = extension === 'csv' ? omexFormats.csv : extension === 'json' ? omexFormats.json : omexFormats.text;
  return { path, format };
}
