/** Re-adds an archive's blocks: against their plan, the events, the summary, the histograms and the quantiles. */
import { gridTimes, histogramTimes } from '@/domain/jobs/result-outputs.ts';
import { parseSum, scaleOf } from '@/engine/statistics/block-sums.ts';
import { replicatesPerBlock } from '@/engine/statistics/blocks.ts';
import { momentsOf } from '@/engine/statistics/moments.ts';
import { addSums, noSums, type PowerSums } from '@/engine/statistics/power-sums.ts';
import { rankOf, standardProbabilities } from '@/engine/statistics/quantile.ts';
import { sumCells, type SummaryShape } from '@/engine/statistics/summary.ts';
import type { ZipReader } from '@/formats/zip/zip-reader.ts';
import { tableHeads } from '../result-tables.ts';
import type { JobFile } from './job-file.ts';
import { readTable, TableError } from './read-table.ts';

export interface ListedBlock {
  point: number;
  firstReplicate: number;
  replicates: number;
  events: number;
  digest: string;
}

export interface Checking {
  zip: ZipReader;
  job: JobFile;
  shape: SummaryShape;
  /** Called with each thing that is wrong. */
  problem: (text: string) => void;
}

export const table = ({ zip }: Checking, name: keyof typeof tableHeads) => {
  const path = `results/${name}.csv`;
  return readTable(path, zip.read(path), tableHeads[name]);
};

/** As tables write numbers: none where it does not exist. */
export const cellText = (value: number): string => (Number.isFinite(value) ? String(value) : '');

const wholeOf = (text: string): number => (/^\d{1,16}$/.test(text) ? Number(text) : NaN);

/** blocks.csv, against the plan that the number of replicates asks for. */
export async function listedBlocks(checking: Checking): Promise<ListedBlock[]> {
  const { job, shape, problem } = checking;
  const cells = sumCells(shape);
  const size = replicatesPerBlock({ replicates: job.replicates, cells, points: job.points });
  const perPoint = Math.ceil(job.replicates / size);
  const blocks: ListedBlock[] = [];
  for await (const [point, first, replicates, events, digest] of table(checking, 'blocks')) {
    const block = {
      point: wholeOf(point!),
      firstReplicate: wholeOf(first!),
      replicates: wholeOf(replicates!),
      events: wholeOf(events!),
      digest: digest!,
    };
    const expected = (blocks.length % perPoint) * size;
    if (
      block.point !== Math.floor(blocks.length / perPoint) ||
      block.firstReplicate !== expected ||
      block.replicates !== Math.min(size, job.replicates - expected)
    )
      throw new TableError(
        `results/blocks.csv: block ${blocks.length} is not the one of replicates from ${expected} on.`,
      );
    blocks.push(block);
  }
  if (blocks.length !== perPoint * job.points)
    throw new TableError(`results/blocks.csv has ${blocks.length} blocks, not ${perPoint * job.points}.`);
  const events = blocks.reduce((sum, block) => sum + block.events, 0);
  if (events !== job.events) problem(`The blocks have ${events} events, job.json says ${job.events}.`);
  return blocks;
}

/** events.csv: one row a replicate of each point, which add up to each block's events. Answered point by point. */
export async function checkEvents(checking: Checking, blocks: ListedBlock[]): Promise<Float64Array> {
  const { job, problem } = checking;
  const events = new Float64Array(job.replicates * job.points);
  let row = 0;
  for await (const [point, number, count] of table(checking, 'events')) {
    const due = [Math.floor(row / job.replicates), row % job.replicates];
    if (row >= events.length || wholeOf(point!) !== due[0] || wholeOf(number!) !== due[1])
      throw new TableError(
        `results/events.csv: replicate ${due[1]} of point ${due[0]} was expected, not ${number} of ${point}.`,
      );
    events[row++] = wholeOf(count!);
  }
  if (row !== events.length) throw new TableError(`results/events.csv has ${row} rows, not ${events.length}.`);
  for (const block of blocks) {
    const { point, firstReplicate, replicates } = block;
    const from = point * job.replicates + firstReplicate;
    const sum = events.subarray(from, from + replicates).reduce((total, value) => total + value, 0);
    if (sum !== block.events)
      problem(`results/events.csv: the block from replicate ${firstReplicate} has ${sum} events, not ${block.events}.`);
  }
  return events;
}

export interface ReAdded {
  /** Over all blocks of a point: point by point, then observable by observable, then by grid time. */
  totals: PowerSums[];
  /** Of the blocks asked for, by their place. */
  chosen: Map<number, PowerSums[]>;
}

/** block-sums.csv, added up. */
export async function addBlockSums(checking: Checking, blocks: ListedBlock[], chosen: Set<number>): Promise<ReAdded> {
  const { job, shape } = checking;
  const times = gridTimes(job.horizon, job.gridIntervals);
  const cells = shape.observables.length * times.length;
  const totals = Array.from({ length: cells * job.points }, noSums);
  const kept = new Map<number, PowerSums[]>();
  let row = 0;
  for await (const [point, first, id, time, ...texts] of table(checking, 'block-sums')) {
    const place = Math.floor(row / cells);
    const cell = row % cells;
    const observable = shape.observables[Math.floor(cell / times.length)]!;
    const block = blocks[place];
    const moment = cellText(times[cell % times.length]!);
    const due = [block?.point, block?.firstReplicate, observable.id, moment].join(', ');
    if (!block || [point, first, id, time].join(', ') !== due)
      throw new TableError(
        `results/block-sums.csv: the row of ${due} was expected, not ${point}, ${first}, ${id}, ${time}.`,
      );
    const sums = texts.map((text) => parseSum(text, scaleOf(observable.kind)));
    if (sums.includes(null)) throw new TableError(`results/block-sums.csv: a sum of ${due} is no number.`);
    addSums(totals[block.point * cells + cell]!, sums as PowerSums);
    if (chosen.has(place)) kept.set(place, [...(kept.get(place) ?? []), sums as PowerSums]);
    row++;
  }
  if (row !== blocks.length * cells)
    throw new TableError(`results/block-sums.csv has ${row} rows, not ${blocks.length * cells}.`);
  return { totals, chosen: kept };
}

/** Rows of a table that has one row a point, observable and grid time, in this order; `cell` counts them. */
async function* cellRows(checking: Checking, name: 'summary' | 'quantiles') {
  const { job, shape } = checking;
  const times = gridTimes(job.horizon, job.gridIntervals);
  const perPoint = shape.observables.length * times.length;
  let cell = 0;
  for await (const [point, id, time, ...values] of table(checking, name)) {
    const observable = shape.observables[Math.floor((cell % perPoint) / times.length)]!;
    const gridPoint = cell % times.length;
    const due = [Math.floor(cell / perPoint), observable.id, cellText(times[gridPoint]!)].join(', ');
    if (cell >= perPoint * job.points || [point, id, time].join(', ') !== due)
      throw new TableError(
        `results/${name}.csv: row ${cell + 1} is of ${id} at ${time} and point ${point}, which is not its turn.`,
      );
    yield { observable, gridPoint, time, cell: cell++, values };
  }
  if (cell !== perPoint * job.points) throw new TableError(`results/${name}.csv has ${cell} rows.`);
}

/** summary.csv: every number, from the sums. Answers how many were compared. */
export async function checkSummary(checking: Checking, totals: PowerSums[]): Promise<number> {
  const { job, problem } = checking;
  let numbers = 0;
  for await (const { observable, time, cell, values } of cellRows(checking, 'summary')) {
    const moments = momentsOf(job.replicates, totals[cell]!, scaleOf(observable.kind));
    const expected = {
      replicates: job.replicates,
      mean: moments.mean,
      mean_standard_error: moments.meanStandardError,
      sd: moments.sd,
      sd_standard_error: moments.sdStandardError,
    };
    for (const [i, [name, value]] of Object.entries(expected).entries()) {
      numbers++;
      if (values[i] !== cellText(value))
        problem(
          `results/summary.csv: ${name} of ${observable.id} at ${time} is ${values[i]}, the blocks give ${cellText(value)}.`,
        );
    }
  }
  return numbers;
}

interface Histogram {
  values: number[];
  widths: number[];
  counts: number[];
}

/** histograms.csv: all replicates are in each, and where each value stands for itself its power sums are the blocks'. */
export async function checkHistograms(checking: Checking, totals: PowerSums[]): Promise<Map<number, Histogram>> {
  const { job, shape, problem } = checking;
  const times = gridTimes(job.horizon, job.gridIntervals);
  const histograms = new Map<number, Histogram>();
  const perPoint = shape.observables.length * times.length;
  const cellOf = new Map<string, number>();
  for (let point = 0; point < job.points; point++)
    for (const [observable, { id }] of shape.observables.entries())
      for (const gridPoint of histogramTimes(job.gridIntervals))
        cellOf.set(
          `${point},${id},${cellText(times[gridPoint]!)}`,
          point * perPoint + observable * times.length + gridPoint,
        );
  for await (const [point, id, time, value, width, count] of table(checking, 'histograms')) {
    const cell = cellOf.get(`${point},${id},${time}`);
    if (cell === undefined)
      throw new TableError(`results/histograms.csv: ${id} at ${time} and point ${point} is not in this job.`);
    const histogram = histograms.get(cell) ?? { values: [], widths: [], counts: [] };
    histogram.values.push(Number(value));
    histogram.widths.push(Number(width));
    histogram.counts.push(wholeOf(count!));
    histograms.set(cell, histogram);
  }
  for (const [key, cell] of cellOf) {
    const name = job.points > 1 ? `point ${key}` : key.slice('0,'.length);
    const { values, widths, counts } = histograms.get(cell) ?? { values: [], widths: [], counts: [] };
    const total = counts.reduce((sum, count) => sum + count, 0);
    if (total !== job.replicates) problem(`results/histograms.csv: ${name} holds ${total} replicates.`);
    const exact = values.every((value, i) => widths[i] === 1 && Number.isSafeInteger(value));
    if (!exact || shape.observables[Math.floor((cell % perPoint) / times.length)]!.kind !== 'count') continue;
    const sums = [1n, 2n, 3n, 4n].map((power) =>
      values.reduce((sum, value, i) => sum + BigInt(value) ** power * BigInt(counts[i] || 0), 0n),
    );
    if (sums.some((sum, i) => sum !== totals[cell]![i]))
      problem(`results/histograms.csv: ${name} has other sums than the blocks.`);
  }
  return histograms;
}

/** quantiles.csv, where a histogram stands beside it. Answers how many numbers were compared. */
export async function checkQuantiles(checking: Checking, histograms: Map<number, Histogram>): Promise<number> {
  const { job, problem } = checking;
  let numbers = 0;
  for await (const { observable, time, cell, values } of cellRows(checking, 'quantiles')) {
    const histogram = histograms.get(cell);
    if (!histogram) continue;
    for (const [i, probability] of standardProbabilities.entries()) {
      numbers++;
      const expected = cellText(quantileOf(histogram, rankOf(job.replicates, probability), observable.kind));
      if (values[i] !== expected)
        problem(
          `results/quantiles.csv: ${probability} of ${observable.id} at ${time} is ${values[i]}, the histogram gives ${expected}.`,
        );
    }
  }
  return numbers;
}

/** A wide bin of counts answers its middle, of real numbers its edge nearer to zero: as engine/statistics/quantile.ts has it. */
function quantileOf({ values, widths, counts }: Histogram, rank: number, kind: 'count' | 'real'): number {
  let seen = 0;
  for (const [i, count] of counts.entries()) {
    seen += count;
    if (seen >= rank) return kind === 'count' ? values[i]! + Math.floor((widths[i]! - 1) / 2) : values[i]!;
  }
  return NaN;
}
