/** Writes the archive of a job's delivered prefix: a deterministic zip, streamed to its file, that is a valid OMEX. */
import { createHash } from 'node:crypto';
import { omexFormats, writeManifest } from '@/formats/omex/write-manifest.ts';
import { writeSbml } from '@/formats/sbml/write-sbml.ts';
import { ZipWriter, type Pieces, type WrittenEntry } from '@/formats/zip/zip-writer.ts';
import { writeReport } from '@/formats/report/write-report.ts';
import { writeSedml } from '@/formats/sedml/write-sedml.ts';
import { readmeText } from './archive-texts.ts';
import { figuresOf } from './figures.ts';
import { jobJson } from './job-json.ts';
import { reportFonts } from './report-fonts.ts';
import { reportOf } from './report-of.ts';

import { csvPieces, resultTables } from './result-tables.ts';
import { sedmlJob } from './sedml-job.ts';
import type { ArchiveSubject, Results } from './subject.ts';
import { tracesParquet } from './traces-parquet.ts';

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
  const { model, version, job } = subject;
  const sbmlText = writeSbml(version.document, { modelId: 'model', name: model.name });
  const tables = resultTables({ inputs: job.inputs, results });
  const traces = results.ensemble.points[0]!.traces.length > 0 ? [tracesParquet(job.inputs, results.ensemble)] : [];
  const figures = figuresOf(subject, results);
  const described = ['job.json', 'provenance.json', 'report.pdf', 'model.xml', 'model.json', 'simulation.sedml'];
  const paths = [...described, ...[...tables, ...traces, ...figures].map(({ path }) => path)];
  const written: WrittenEntry[] = [];
  const add = async (path: string, pieces: Pieces) => void written.push(await zip.add(path, pieces));

  await add('README.txt', [readmeText(subject, results, paths)]);
  await add('manifest.xml', [writeManifest([...paths, 'README.txt', 'SHA256SUMS'].map(manifestEntry))]);
  await add('provenance.json', [provenance]);
  await add('model.xml', [sbmlText]);
  await add('model.json', [JSON.stringify(version.document)]);
  await add('simulation.sedml', [writeSedml(sedmlJob(subject, results.ensemble))]);
  for (const { path, rows } of tables) await add(path, csvPieces(rows()));
  for (const { path, pieces } of traces) await add(path, pieces());
  const resultsDigest = digestOf(written.filter(({ path }) => path.startsWith('results/')));
  await add('job.json', [jobJson(subject, results, resultsDigest)]);
  for (const { path, svg } of figures) await add(path, [svg()]);
  const report = reportOf({ subject, results, resultsDigest, figures });
  await add('report.pdf', [await writeReport(report, await reportFonts(JSON.stringify(report)))]);
  await zip.add('SHA256SUMS', sumLines(written));
  return resultsDigest;
}

const byPath = (a: WrittenEntry, b: WrittenEntry): number => (a.path < b.path ? -1 : a.path > b.path ? 1 : 0);

/** As sha256sum writes and checks it, sorted by path. */
const sumLines = (entries: WrittenEntry[]): string[] =>
  [...entries].sort(byPath).map(({ sha256, path }) => `${sha256}  ${path}\n`);

export const digestOf = (entries: WrittenEntry[]): string =>
  createHash('sha256').update(sumLines(entries).join('')).digest('hex');

const formats: Record<string, string> = {
  csv: omexFormats.csv,
  json: omexFormats.json,
  parquet: omexFormats.parquet,
  pdf: omexFormats.pdf,
  sedml: omexFormats.sedml,
  svg: omexFormats.svg,
  xml: omexFormats.sbml,
};

/** What other programs open first is the description of the simulation, which names the model. */
const manifestEntry = (path: string) => ({
  path,
  format: formats[path.split('.').at(-1)!] ?? omexFormats.text,
  master: path === 'simulation.sedml',
});
