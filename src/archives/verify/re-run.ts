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
import { addBatch, emptyEnsemble, type Ensemble } from '../ensemble.ts';
import { jobTask } from '../job-task.ts';
import { csvPieces, resultTables } from '../result-tables.ts';
import { tracesParquet } from '../traces-parquet.ts';
import type { BlockCrossSums } from './check-covariances.ts';
import type { ListedBlock, ReAdded } from './check-sums.ts';
import type { JobFile } from './job-file.ts';
import { readTable } from './read-table.ts';

interface ReRun {
  zip: ZipReader;
  job: JobFile;
  /** By point. */
  networks: ResolvedNetwork[];
  shape: SummaryShape;
  blocks: ListedBlock[];
  /** As listed, by point and then by replicate. */
  events: Float64Array;
  reAdded: ReAdded;
  crossSums: BlockCrossSums;
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
  const traces: { point: number; trace: Trace }[] = [];
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
    const { point } = options.blocks[place]!;
    traces.push(...result.traces.map((trace) => ({ point, trace })));
    again?.add(point, result);
  }
  await compareTraces(options, traces);
  await again?.compareTables();
  return places.length;
}

/** When all blocks are run again, so are all tables. */
class WholeAgain {
  readonly #options: ReRun;
  readonly #points: { ensemble: Ensemble; merger: BlockMerger }[];
  #complete = true;

  constructor(options: ReRun) {
    this.#options = options;
    this.#points = options.networks.map(() => ({
      ensemble: emptyEnsemble(),
      merger: new BlockMerger(options.shape, options.blocks[0]!.replicates),
    }));
  }

  add(point: number, result: BatchResult): void {
    const { ensemble, merger } = this.#points[point]!;
    this.#complete &&= result.firstReplicate === ensemble.replicates;
    if (!this.#complete) return;
    const { firstReplicate, replicateCount, kernel, failure, ...content } = result;
    const points = [{ ...content, summary: result.summary.encode() }];
    addBatch(ensemble, { firstReplicate, replicateCount, kernel, failure, engineVersion, points });
    merger.add({ firstReplicate, records: recordsOf(result), share: result.blocks! });
  }

  async compareTables(): Promise<void> {
    const { job, zip, problem } = this.#options;
    if (!this.#complete || this.#points.some(({ ensemble }) => ensemble.replicates !== job.replicates)) return;
    const ensemble = { ...this.#points[0]!.ensemble, points: this.#points.map((each) => each.ensemble.points[0]!) };
    const results = { ensemble, blocks: this.#points.map(({ merger }) => merger.share()) };
    const tables = resultTables({ inputs: job, results }).map(({ path, rows }) => ({
      path,
      pieces: () => csvPieces(rows()),
    }));
    const traces = ensemble.points[0]!.traces.length > 0 ? [tracesParquet(job, ensemble)] : [];
    for (const { path, pieces } of [...tables, ...traces]) {
      const hashes = [createHash('sha256'), createHash('sha256')] as const;
      for (const piece of pieces()) hashes[0].update(piece);
      for await (const piece of zip.read(path)) hashes[1].update(piece);
      if (hashes[0].digest('hex') !== hashes[1].digest('hex'))
        problem(`Made again from all blocks, ${path} has other bytes.`);
    }
  }
}

async function reRunBlock({ job, networks, shape, ...options }: ReRun, place: number): Promise<BatchResult> {
  const { point, firstReplicate, replicates, events, digest } = options.blocks[place]!;
  const network = networks[point]!;
  const { networks: _, ...task } = jobTask({
    inputs: job,
    seed: job.seed,
    networks: [network],
    firstReplicate,
    replicateCount: replicates,
  });
  const { problem } = options;
  const name =
    `the block of replicates ${firstReplicate} to ${firstReplicate + replicates - 1}` +
    (job.points > 1 ? ` of point ${point}` : '');
  const result = await runBatch({ ...task, network, point, kernel: job.kernel });
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
  const crossDiffers = (options.crossSums[place] ?? []).some((sums, cell) => {
    const again = block!.sums.crossSums(Math.floor(cell / shape.gridPoints), cell % shape.gridPoints);
    return sums.some((sum, power) => sum !== again[power]);
  });
  if (crossDiffers) problem(`Run again, ${name} has other sums of products.`);
  const replicate = result.eventsPerReplicate.findIndex(
    (count, i) => count !== options.events[point * job.replicates + firstReplicate + i],
  );
  if (replicate >= 0)
    problem(`Run again, replicate ${firstReplicate + replicate} has ${result.eventsPerReplicate[replicate]} events.`);
  else if (result.eventsPerReplicate.reduce((sum, count) => sum + count, 0) !== events)
    problem(`Run again, ${name} has other events.`);
  return result;
}

/** The listed traces of the replicates that were run again. */
async function compareTraces(
  { zip, job, shape, problem }: ReRun,
  traces: { point: number; trace: Trace }[],
): Promise<void> {
  const path = 'results/traces.csv';
  if (traces.length === 0) return;
  const times = gridTimes(job.horizon, job.gridIntervals);
  const expected = new Map(
    traces.map(({ point, trace: { replicate, values } }) => [`${point} ${replicate}`, { replicate, values }]),
  );
  const seen = new Map<string, number>();
  const head = ['point', 'replicate', 'time', ...shape.observables.map(({ id }) => id)];
  for await (const [point, replicate, time, ...cells] of readTable(path, zip.read(path), head)) {
    const key = `${point} ${replicate}`;
    const { values } = expected.get(key) ?? {};
    if (!values) continue;
    const i = seen.get(key) ?? 0;
    seen.set(key, i + 1);
    const again = shape.observables.map((_, observable) => String(values[observable * times.length + i]));
    if (time !== String(times[i]) || cells.some((cell, observable) => cell !== again[observable])) {
      problem(`Run again, replicate ${replicate} has another trace than ${path}, first at ${time}.`);
      expected.delete(key);
    }
  }
  for (const [key, { replicate }] of expected)
    if (seen.get(key) !== times.length) problem(`${path} does not hold replicate ${replicate} whole.`);
}
