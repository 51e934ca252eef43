/** Runs chosen blocks of an archive again and compares everything that they gave. */
import { createHash } from 'node:crypto';
import { gridTimes } from '@/domain/jobs/result-outputs.ts';
import type { ResolvedNetwork } from '@/domain/network/resolved.ts';
import type { BatchResult, Trace } from '@/engine/ensemble.ts';
import { engineVersion } from '@/engine/engine-version.ts';
import { runBatch } from '@/engine/run-batch.ts';
import { recordsOf } from '@/engine/statistics/blocks.ts';
import { BlockMerger, blocksOf } from '@/engine/statistics/merge-blocks.ts';
import type { SummaryShape } from '@/engine/statistics/summary.ts';
import type { ZipReader } from '@/formats/zip/zip-reader.ts';
import { addBatch, emptyEnsemble } from '../ensemble.ts';
import { jobTask } from '../job-task.ts';
import { csvPieces, resultTables } from '../result-tables.ts';
import { tracesParquet } from '../traces-parquet.ts';
import type { ListedBlock, ReAdded } from './check-sums.ts';
import type { JobFile } from './job-file.ts';
import { readTable } from './read-table.ts';

interface ReRun {
  zip: ZipReader;
  job: JobFile;
  network: ResolvedNetwork;
  shape: SummaryShape;
  blocks: ListedBlock[];
  /** As listed, by replicate. */
  events: Float64Array;
  reAdded: ReAdded;
  places: number[];
  problem: (text: string) => void;
  onBlock: (place: number) => void;
}

/** Answers how many blocks were run. */
export async function reRun(options: ReRun): Promise<number> {
  const { job, places, problem } = options;
  if (places.length === 0) return 0;
  if (job.engineVersion !== engineVersion) {
    problem(`Blocks cannot be run again: ${job.engineVersion} made them, and this is ${engineVersion}.`);
    return 0;
  }
  const traces: Trace[] = [];
  const again = places.length === options.blocks.length ? new WholeAgain(options) : null;
  for (const place of places) {
    options.onBlock(place);
    const result = await reRunBlock(options, place).catch((error: unknown) => {
      // The engine refuses an impossible task: a seed too large, a passage of nothing.
      if (error instanceof RangeError) return error;
      throw error;
    });
    if (result instanceof RangeError) {
      problem(`Blocks cannot be run again: ${result.message}.`);
      return 0;
    }
    traces.push(...result.traces);
    again?.add(result);
  }
  await compareTraces(options, traces);
  await again?.compareTables();
  return places.length;
}

/** When all blocks are run again, so are all tables. */
class WholeAgain {
  readonly #options: ReRun;
  readonly #ensemble = emptyEnsemble();
  readonly #merger: BlockMerger;
  #complete = true;

  constructor(options: ReRun) {
    this.#options = options;
    this.#merger = new BlockMerger(options.shape, options.blocks[0]!.replicates);
  }

  add(result: BatchResult): void {
    this.#complete &&= result.firstReplicate === this.#ensemble.replicates;
    if (!this.#complete) return;
    addBatch(this.#ensemble, { ...result, engineVersion, summary: result.summary.encode() });
    this.#merger.add({ ...result, records: recordsOf(result), share: result.blocks! });
  }

  async compareTables(): Promise<void> {
    const { job, zip, problem } = this.#options;
    if (!this.#complete || this.#ensemble.replicates !== job.replicates) return;
    const results = { ensemble: this.#ensemble, blocks: this.#merger.share() };
    const tables = resultTables({ inputs: job, results }).map(({ path, rows }) => ({
      path,
      pieces: () => csvPieces(rows()),
    }));
    const traces = this.#ensemble.traces.length > 0 ? [tracesParquet(job, this.#ensemble)] : [];
    for (const { path, pieces } of [...tables, ...traces]) {
      const hashes = [createHash('sha256'), createHash('sha256')] as const;
      for (const piece of pieces()) hashes[0].update(piece);
      for await (const piece of zip.read(path)) hashes[1].update(piece);
      if (hashes[0].digest('hex') !== hashes[1].digest('hex'))
        problem(`Made again from all blocks, ${path} has other bytes.`);
    }
  }
}

async function reRunBlock({ job, network, shape, ...options }: ReRun, place: number): Promise<BatchResult> {
  const { firstReplicate, replicates, events, digest } = options.blocks[place]!;
  const task = jobTask({ inputs: job, seed: job.seed, network, point: 0, firstReplicate, replicateCount: replicates });
  const { problem } = options;
  const name = `the block of replicates ${firstReplicate} to ${firstReplicate + replicates - 1}`;
  const result = await runBatch({ ...task, kernel: job.kernel });
  if (result.replicateCount !== replicates) {
    problem(`Run again, ${name} ends after ${result.replicateCount} replicates.`);
    return result;
  }
  const merger = new BlockMerger(shape, Infinity, firstReplicate);
  merger.add({ firstReplicate, records: recordsOf(result), share: result.blocks! });
  const [block] = blocksOf({ shape, share: merger.share(), records: recordsOf(result), firstReplicate });
  if (block!.digest !== digest) problem(`Run again, ${name} has the digest ${block!.digest}, not ${digest}.`);
  const listed = options.reAdded.chosen.get(place)!;
  const differs = listed.findIndex((sums, cell) => {
    const again = block!.sums.sums(Math.floor(cell / shape.gridPoints), cell % shape.gridPoints);
    return sums.some((sum, power) => sum !== again[power]);
  });
  if (differs >= 0) {
    const time = gridTimes(job.horizon, job.gridIntervals)[differs % shape.gridPoints];
    const { id } = shape.observables[Math.floor(differs / shape.gridPoints)]!;
    problem(`Run again, ${name} has other sums, first of ${id} at ${time}.`);
  }
  const replicate = result.eventsPerReplicate.findIndex((count, i) => count !== options.events[firstReplicate + i]);
  if (replicate >= 0)
    problem(`Run again, replicate ${firstReplicate + replicate} has ${result.eventsPerReplicate[replicate]} events.`);
  else if (result.eventsPerReplicate.reduce((sum, count) => sum + count, 0) !== events)
    problem(`Run again, ${name} has other events.`);
  return result;
}

/** The listed traces of the replicates that were run again. */
async function compareTraces({ zip, job, shape, problem }: ReRun, traces: Trace[]): Promise<void> {
  const path = 'results/traces.csv';
  if (traces.length === 0) return;
  const times = gridTimes(job.horizon, job.gridIntervals);
  const expected = new Map(traces.map(({ replicate, values }) => [String(replicate), values]));
  const seen = new Map<string, number>();
  const head = ['point', 'replicate', 'time', ...shape.observables.map(({ id }) => id)];
  for await (const [, replicate, time, ...cells] of readTable(path, zip.read(path), head)) {
    const values = expected.get(replicate!);
    if (!values) continue;
    const i = seen.get(replicate!) ?? 0;
    seen.set(replicate!, i + 1);
    const again = shape.observables.map((_, observable) => String(values[observable * times.length + i]));
    if (time !== String(times[i]) || cells.some((cell, observable) => cell !== again[observable])) {
      problem(`Run again, replicate ${replicate} has another trace than ${path}, first at ${time}.`);
      expected.delete(replicate!);
    }
  }
  for (const replicate of expected.keys())
    if (seen.get(replicate) !== times.length) problem(`${path} does not hold replicate ${replicate} whole.`);
}
