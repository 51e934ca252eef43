/** Writes the archive of a job's delivered prefix: a deterministic zip, streamed to its file, that is a valid OMEX. */
import { createHash } from 'node:crypto';
import { omexFormats, writeManifest } from '@/formats/omex/write-manifest.ts';
import { writeSbml } from '@/formats/sbml/write-sbml.ts';
import { ZipWriter, type Pieces, type WrittenEntry } from '@/formats/zip/zip-writer.ts';
import { jobJson, readmeText } from './archive-texts.ts';
import { csvPieces, resultTables } from './result-tables.ts';
import type { ArchiveSubject, Results } from './subject.ts';

export interface WrittenArchive {
  sha256: string;
  bytes: number;
  /** SHA-256 over names and checksums of the files under results/: equal for equal jobs, whatever the batches were. */
  resultsDigest: string;
}

export async function writeArchive(options: {
  file: string;
  subject: ArchiveSubject;
  results: Results;
  provenance: string;
}): Promise<WrittenArchive> {
  const zip = await ZipWriter.create(options.file);
  try {
    const resultsDigest = await writeEntries(zip, options);
    return { ...(await zip.end()), resultsDigest };
  } catch (error) {
    await zip.abandon();
    throw error;
  }
}

async function writeEntries(
  zip: ZipWriter,
  { subject, results, provenance }: { subject: ArchiveSubject; results: Results; provenance: string },
): Promise<string> {
  const { model, version } = subject;
  const tables = resultTables({ inputs: subject.job.inputs, results });
  const paths = ['job.json', 'provenance.json', 'model.xml', 'model.json', ...tables.map(({ path }) => path)];
  const written: WrittenEntry[] = [];
  const add = async (path: string, pieces: Pieces) => void written.push(await zip.add(path, pieces));

  await add('README.txt', [readmeText(subject, results, paths)]);
  await add('manifest.xml', [writeManifest([...paths, 'README.txt', 'SHA256SUMS'].map(manifestEntry))]);
  await add('provenance.json', [provenance]);
  await add('model.xml', [writeSbml(version.document, { modelId: 'model', name: model.name })]);
  await add('model.json', [JSON.stringify(version.document)]);
  for (const { path, rows } of tables) await add(path, csvPieces(rows()));
  const resultsDigest = digestOf(written.filter(({ path }) => path.startsWith('results/')));
  await add('job.json', [jobJson(subject, results, resultsDigest)]);
  await zip.add('SHA256SUMS', sumLines(written));
  return resultsDigest;
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
