/**
 * Checks an archive by itself, without the service that made it: its checksums, its blocks re-added against every number of
 * the tables, and some of its blocks run again. Meant for archives from anywhere: nothing in them is believed unread.
 */
import { createHash } from 'node:crypto';
import type { ResolvedNetwork } from '@/domain/network/resolved.ts';
import { networksOf } from '@/domain/jobs/networks-of.ts';
import { prepareNetwork } from '@/engine/kernel/prepare-network.ts';
import { limits } from '@/domain/limits.ts';
import { correlatedPairs } from '../job-task.ts';
import type { SummaryShape } from '@/engine/statistics/summary.ts';
import { ZipError, ZipReader } from '@/formats/zip/zip-reader.ts';
import { sha256Hex } from '../batch-file.ts';
import { digestOf } from '../write-archive.ts';
import { blockCrossSums, checkCovariances } from './check-covariances.ts';
import * as checks from './check-sums.ts';
import { readJobFile, readModelFile, type JobFile } from './job-file.ts';
import { TableError } from './read-table.ts';
import { reRun } from './re-run.ts';

export interface VerifyReport {
  /** Empty when everything that was checked agrees. Each names what differs. */
  problems: string[];
  /** What was checked and agreed, in sentences. */
  checked: string[];
  blocks: number;
  reRun: number;
}

const problemsMost = 50;

/** A fault that ends the verification. */
class Stop extends Error {}

/**
 * `choose` picks which blocks to run again, by place: of `blocks` blocks, at most so many. Never throws on what is in the file;
 * throws when the file cannot be opened.
 */
export async function verifyArchive(options: {
  file: string;
  choose: (blocks: number) => number[];
  /** Told before each block that is run again. */
  onBlock?: (place: number) => void;
}): Promise<VerifyReport> {
  const report: VerifyReport = { problems: [], checked: [], blocks: 0, reRun: 0 };
  let zip: ZipReader | null = null;
  try {
    zip = await ZipReader.open(options.file);
    await verify(zip, options, report);
  } catch (error) {
    if (!(error instanceof ZipError || error instanceof TableError || error instanceof Stop)) throw error;
    report.problems.push(error.message);
  } finally {
    await zip?.close();
  }
  return report;
}

async function verify(
  zip: ZipReader,
  options: Parameters<typeof verifyArchive>[0],
  report: VerifyReport,
): Promise<void> {
  const problem = (text: string): void => {
    if (report.problems.length < problemsMost) report.problems.push(text);
  };
  const resultsDigest = await checkSums(zip, problem, report);
  const { job, networks } = await readJob(zip, problem);
  const network = networks[0]!;
  if (job.resultsDigest !== resultsDigest) problem('job.json names another digest of the results than they have.');
  const prepared = prepareNetwork(network);
  const shape: SummaryShape = {
    observables: network.observables.map(({ id }, i) => ({ id, kind: prepared.observablePlaces[i]!.kind })),
    gridPoints: job.gridIntervals + 1,
    ...(job.correlations ? { pairs: correlatedPairs(network, job.correlations) } : {}),
  };
  if (shape.pairs?.some((pair) => pair.some((observable) => shape.observables[observable]?.kind !== 'count')))
    throw new Stop('job.json asks for correlations of what is no count of the model.');
  if ((shape.pairs ?? []).length * shape.gridPoints * job.points > limits.correlationCells)
    throw new Stop('job.json asks for more correlations than a job has.');
  const checking = { zip, job, shape, problem };
  const blocks = await checks.listedBlocks(checking);
  report.blocks = blocks.length;
  const places = [...new Set(options.choose(blocks.length))].sort((a, b) => a - b);
  const events = await checks.checkEvents(checking, blocks);
  const reAdded = await checks.addBlockSums(checking, blocks, new Set(places));
  const numbers = await checks.checkSummary(checking, reAdded.totals);
  const histograms = await checks.checkHistograms(checking, reAdded.totals);
  const quantiles = await checks.checkQuantiles(checking, histograms);
  const crossSums = await blockCrossSums(checking, blocks);
  const covariances = await checkCovariances(checking, blocks, { reAdded, crossSums });
  if (report.problems.length === 0 && covariances > 0)
    report.checked.push(`${covariances} numbers of covariances.csv follow from the blocks.`);
  if (report.problems.length === 0)
    report.checked.push(
      `${blocks.length} blocks re-added: ${numbers} numbers of summary.csv, ${quantiles} of quantiles.csv, ` +
        `${histograms.size} histograms and ${events.length} event counts follow from them.`,
    );
  const { onBlock = () => undefined } = options;
  const before = report.problems.length;
  report.reRun = await reRun({
    zip,
    job,
    networks,
    shape,
    blocks,
    events,
    reAdded,
    crossSums,
    places,
    problem,
    onBlock,
  });
  if (report.reRun === 0 || report.problems.length > before) return;
  report.checked.push(`${report.reRun} of ${blocks.length} blocks run again: digests, sums, events and traces agree.`);
  if (report.reRun === blocks.length) report.checked.push('All tables made again from them: every byte agrees.');
}

/** SHA256SUMS against the entries; answers the digest of the results. */
async function checkSums(zip: ZipReader, problem: (text: string) => void, report: VerifyReport): Promise<string> {
  const listed = new Map<string, string>();
  for (const line of (await zip.text('SHA256SUMS')).split('\n').slice(0, -1)) {
    const match = /^([0-9a-f]{64}) {2}(.+)$/.exec(line);
    if (!match) throw new Stop('SHA256SUMS has a line that is no checksum.');
    listed.set(match[2]!, match[1]!);
  }
  const results: { path: string; sha256: string; bytes: number }[] = [];
  for (const { path, bytes } of zip.entries.values()) {
    if (path === 'SHA256SUMS') continue;
    const hash = createHash('sha256');
    for await (const piece of zip.read(path)) hash.update(piece);
    const sha256 = hash.digest('hex');
    if (!listed.has(path)) problem(`${path} is not in SHA256SUMS.`);
    else if (listed.get(path) !== sha256) problem(`${path} is not the file whose checksum SHA256SUMS has.`);
    listed.delete(path);
    if (path.startsWith('results/')) results.push({ path, sha256, bytes });
  }
  for (const path of listed.keys()) problem(`${path} stands in SHA256SUMS and is missing.`);
  if (report.problems.length === 0)
    report.checked.push(`${zip.entries.size - 1} files have the checksums of SHA256SUMS.`);
  return digestOf(results);
}

async function readJob(
  zip: ZipReader,
  problem: (text: string) => void,
): Promise<{ job: JobFile; networks: ResolvedNetwork[] }> {
  const job = readJobFile(await zip.text('job.json'));
  if (!job.ok) throw new Stop(job.problem);
  const text = await zip.text('model.json');
  if (sha256Hex(text) !== job.value.model.contentHash) problem('model.json is not the model that job.json names.');
  const document = readModelFile(text);
  if (!document.ok) throw new Stop(document.problem);
  const resolved = networksOf(document.value, job.value);
  if (!resolved.ok) throw new Stop(`The model cannot run: ${resolved.problems[0]?.message}`);
  return { job: job.value, networks: resolved.networks };
}
