/**
 * The tables under `results/`, row by row. Their bytes depend on the job's inputs and its delivered replicates alone.
 *
 * Numbers are written with the fewest digits that read back as the same double; a number that does not exist for so few
 * replicates is an empty field.
 */
import { stringify } from 'csv-stringify/sync';
import { gridTimes, histogramTimes } from '@/domain/jobs/result-outputs.ts';
import type { JobInputs, PassageInput } from '@/domain/jobs/job-inputs.ts';
import type { EnsembleStatistics, EnsembleSummary } from '@/engine/ensemble.ts';
import { distributionOf } from '@/engine/statistics/distribution-of.ts';
import { passageEstimates } from '@/engine/statistics/first-passage.ts';
import { standardProbabilities } from '@/engine/statistics/quantile.ts';
import { asSummary, statisticsOf } from '@/engine/statistics/statistics-of.ts';
import { joined } from '@/engine/statistics/block-collector.ts';
import { scaleOf, sumText } from '@/engine/statistics/block-sums.ts';
import { blocksOf } from '@/engine/statistics/merge-blocks.ts';
import { recordsOfEnsemble, type Ensemble } from './ensemble.ts';
import type { Results } from './subject.ts';

type Cell = string | number;
type Row = Cell[];

export interface ResultTable {
  path: string;
  rows: () => Iterable<Row>;
}

/** First rows; `verify` reads the tables by them. */
export const tableHeads = {
  summary: ['point', 'observable', 'time', 'replicates', 'mean', 'mean_standard_error', 'sd', 'sd_standard_error'],
  histograms: ['point', 'observable', 'time', 'value', 'width', 'count'],
  events: ['point', 'replicate', 'events'],
  'first-passage': [
    'point',
    'observable',
    'direction',
    'threshold',
    'replicates',
    'passed',
    'probability',
    'probability_lower',
    'probability_upper',
    'restricted_mean',
    'restricted_mean_standard_error',
    'mean',
    'mean_standard_error',
    ...standardProbabilities.flatMap((p) => [`q${p}`, `q${p}_lower`, `q${p}_upper`]),
  ],
  'passage-times': ['point', 'observable', 'direction', 'threshold', 'replicate', 'time'],
  blocks: ['point', 'first_replicate', 'replicates', 'events', 'digest'],
  'block-sums': [
    'point',
    'first_replicate',
    'observable',
    'time',
    'sum',
    'sum_of_squares',
    'sum_of_cubes',
    'sum_of_fourths',
  ],
  quantiles: ['point', 'observable', 'time', ...standardProbabilities.map((probability) => `q${probability}`)],
};

const rowsPerPiece = 1_000;

/** The CSV text (RFC 4180 quoting, line feeds) in pieces. */
export function* csvPieces(rows: Iterable<Row>): Iterable<string> {
  let piece: Row[] = [];
  for (const row of rows) {
    piece.push(row.map((cell) => (typeof cell === 'number' && !Number.isFinite(cell) ? '' : cell)));
    if (piece.length < rowsPerPiece) continue;
    yield stringify(piece);
    piece = [];
  }
  if (piece.length > 0) yield stringify(piece);
}

export function resultTables({
  inputs,
  results,
}: {
  inputs: Pick<JobInputs, 'horizon' | 'gridIntervals' | 'passages'>;
  results: Results;
}): ResultTable[] {
  const { ensemble } = results;
  if (!ensemble.summary) throw new Error('An empty prefix has no results.');
  const summary = ensemble.summary;
  const times = gridTimes(inputs.horizon, inputs.gridIntervals);
  const statistics = statisticsOf(summary, times);
  const tables: ResultTable[] = [
    { path: 'results/summary.csv', rows: () => summaryRows(statistics) },
    { path: 'results/quantiles.csv', rows: () => quantileRows(statistics) },
    { path: 'results/histograms.csv', rows: () => histogramRows(summary, times, histogramTimes(inputs.gridIntervals)) },
    { path: 'results/events.csv', rows: () => eventRows(ensemble.events) },
    { path: 'results/blocks.csv', rows: () => blockRows(results) },
    { path: 'results/block-sums.csv', rows: () => blockSumRows(results, times) },
  ];
  const passages = (inputs.passages ?? []).map((passage, index) => ({
    ...passage,
    times: joined(ensemble.passages[index] ?? []),
  }));
  if (passages.length > 0)
    tables.push(
      { path: 'results/first-passage.csv', rows: () => passageRows(passages, inputs.horizon) },
      { path: 'results/passage-times.csv', rows: () => passageTimeRows(passages) },
    );
  if (ensemble.traces.length > 0)
    tables.push({ path: 'results/traces.csv', rows: () => traceRows(ensemble, summary.observables, times) });
  return tables;
}

function* summaryRows({ replicates, times, observables }: EnsembleStatistics): Iterable<Row> {
  yield tableHeads.summary;
  for (const { id, mean, meanStandardError, sd, sdStandardError } of observables)
    for (const [i, time] of times.entries())
      yield [0, id, time, replicates, mean[i]!, meanStandardError[i]!, sd[i]!, sdStandardError[i]!];
}

function* quantileRows({ times, observables }: EnsembleStatistics): Iterable<Row> {
  yield tableHeads.quantiles;
  for (const { id, quantiles } of observables)
    for (const [i, time] of times.entries())
      yield [0, id, time, ...standardProbabilities.map((probability) => quantiles[probability]![i]!)];
}

function* histogramRows(summary: EnsembleSummary, times: number[], at: number[]): Iterable<Row> {
  yield tableHeads.histograms;
  for (const id of summary.observables)
    for (const gridPoint of at) {
      const { values, widths, counts } = distributionOf(summary, id, gridPoint);
      for (const [i, value] of values.entries()) yield [0, id, times[gridPoint]!, value, widths[i]!, counts[i]!];
    }
}

function* eventRows(pieces: Float64Array[]): Iterable<Row> {
  yield tableHeads.events;
  let replicate = 0;
  for (const piece of pieces) for (const events of piece) yield [0, replicate++, events];
}

interface TimedPassage extends PassageInput {
  times: Float64Array;
}

/** An empty mean: not every replicate passed; an empty quantile: not reached by the horizon, or not bounded by so few. */
function* passageRows(passages: TimedPassage[], horizon: number): Iterable<Row> {
  yield tableHeads['first-passage'];
  for (const { observable, direction, threshold, times } of passages) {
    const { replicates, passed, probability, restrictedMean, mean, quantiles } = passageEstimates(times, horizon);
    yield [
      0,
      observable,
      direction,
      threshold,
      replicates,
      passed,
      probability.value,
      probability.lower,
      probability.upper,
      restrictedMean.value,
      restrictedMean.standardError,
      mean?.value ?? '',
      mean?.standardError ?? '',
      ...standardProbabilities.flatMap((p) => [quantiles[p]!.value, quantiles[p]!.lower, quantiles[p]!.upper]),
    ];
  }
}

/** An empty time: not passed by the horizon. */
function* passageTimeRows(passages: TimedPassage[]): Iterable<Row> {
  yield tableHeads['passage-times'];
  for (const { observable, direction, threshold, times } of passages)
    for (const [replicate, time] of times.entries()) yield [0, observable, direction, threshold, replicate, time];
}

function* traceRows({ traces }: Ensemble, observables: string[], times: number[]): Iterable<Row> {
  yield ['point', 'replicate', 'time', ...observables];
  for (const { replicate, values } of traces)
    for (const [i, time] of times.entries())
      yield [0, replicate, time, ...observables.map((_, observable) => values[observable * times.length + i]!)];
}

const blocksIn = ({ ensemble, blocks }: Results) => {
  const { shape } = asSummary(ensemble.summary!);
  return blocksOf({ shape, share: blocks, records: recordsOfEnsemble(ensemble) });
};

function* blockRows(results: Results): Iterable<Row> {
  yield tableHeads.blocks;
  const events = joined(results.ensemble.events);
  for (const { firstReplicate, replicates, digest } of blocksIn(results)) {
    const sum = events.subarray(firstReplicate, firstReplicate + replicates).reduce((total, value) => total + value, 0);
    yield [0, firstReplicate, replicates, sum, digest];
  }
}

function* blockSumRows(results: Results, times: number[]): Iterable<Row> {
  yield tableHeads['block-sums'];
  const { observables } = asSummary(results.ensemble.summary!).shape;
  for (const { firstReplicate, sums } of blocksIn(results))
    for (const [observable, { id, kind }] of observables.entries())
      for (const [gridPoint, time] of times.entries())
        yield [0, firstReplicate, id, time, ...powerSumTexts(sums.sums(observable, gridPoint), scaleOf(kind))];
}

const powerSumTexts = (sums: bigint[], scale: bigint): string[] => sums.map((sum) => sumText(sum, scale));
