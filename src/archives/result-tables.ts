/**
 * The tables under `results/`, row by row. Their bytes depend on the job's inputs and its delivered replicates alone.
 *
 * Numbers are written with the fewest digits that read back as the same double; a number that does not exist for so few
 * replicates is an empty field.
 */
import { stringify } from 'csv-stringify/sync';
import { gridTimes, histogramTimes } from '@/domain/jobs/result-outputs.ts';
import type { JobInputs, PassageInput } from '@/domain/jobs/job-inputs.ts';
import { targetName, type Sweep } from '@/domain/jobs/sweep.ts';
import type { EnsembleStatistics, EnsembleSummary } from '@/engine/ensemble.ts';
import { crossPowers } from '@/engine/statistics/cross-cells.ts';
import { crossMomentsAt } from '@/engine/statistics/cross-statistics.ts';
import { distributionOf } from '@/engine/statistics/distribution-of.ts';
import { passageEstimates } from '@/engine/statistics/first-passage.ts';
import { standardProbabilities } from '@/engine/statistics/quantile.ts';
import { asSummary, statisticsOf } from '@/engine/statistics/statistics-of.ts';
import type { Summary } from '@/engine/statistics/summary.ts';
import { joined } from '@/engine/statistics/block-collector.ts';
import { scaleOf, sumText } from '@/engine/statistics/block-sums.ts';
import type { BlockShare } from '@/engine/statistics/blocks.ts';
import { blocksOf } from '@/engine/statistics/merge-blocks.ts';
import { recordsOfPoint, type PointEnsemble } from './ensemble.ts';
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
  covariances: [
    'point',
    'observable',
    'other_observable',
    'time',
    'covariance',
    'covariance_standard_error',
    'correlation',
    'correlation_standard_error',
  ],
  'block-cross-sums': [
    'point',
    'first_replicate',
    'observable',
    'other_observable',
    'time',
    ...crossPowers.map(([x, y]) => `sum_x${x}_y${y}`),
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
  inputs: Pick<JobInputs, 'horizon' | 'gridIntervals' | 'passages' | 'correlations' | 'sweep'>;
  results: Results;
}): ResultTable[] {
  const { points, replicates } = results.ensemble;
  if (points.length === 0) throw new Error('An empty prefix has no results.');
  const times = gridTimes(inputs.horizon, inputs.gridIntervals);
  const passages = inputs.passages ?? [];
  const statistics = points.map(({ summary }) => once(() => statisticsOf(summary, times)));
  /** The rows of each point, with its number in front. */
  const table = (name: keyof typeof tableHeads, rowsOf: (point: PointEnsemble, place: number) => Iterable<Row>) => ({
    path: `results/${name}.csv`,
    *rows(): Iterable<Row> {
      yield tableHeads[name];
      for (const [place, point] of points.entries()) for (const row of rowsOf(point, place)) yield [place, ...row];
    },
  });
  const timed = ({ passages: found }: PointEnsemble): TimedPassage[] =>
    passages.map((passage, index) => ({ ...passage, times: joined(found[index] ?? []) }));
  const tables: ResultTable[] = [
    table('summary', (_, place) => summaryRows(statistics[place]!())),
    table('quantiles', (_, place) => quantileRows(statistics[place]!())),
    table('histograms', ({ summary }) => histogramRows(summary, times, histogramTimes(inputs.gridIntervals))),
    table('events', ({ events }) => eventRows(events)),
    table('blocks', (point, place) => blockRows(point, results.blocks[place]!)),
    table('block-sums', (point, place) => blockSumRows(point, results.blocks[place]!, times)),
  ];
  if (inputs.sweep) tables.unshift({ path: 'results/points.csv', rows: () => pointRows(inputs.sweep!) });
  if (passages.length > 0)
    tables.push(
      table('first-passage', (point) => passageRows(timed(point), inputs.horizon)),
      table('passage-times', (point) => passageTimeRows(timed(point))),
    );
  if (inputs.correlations)
    tables.push(
      table('covariances', ({ summary }) => covarianceRows(asSummary(summary), times)),
      table('block-cross-sums', (point, place) => blockCrossSumRows(point, results.blocks[place]!, times)),
    );
  if (replicates > 0 && points[0]!.traces.length > 0) {
    const { observables } = points[0]!.summary;
    tables.push({ path: 'results/traces.csv', rows: () => traceRows(points, observables, times) });
  }
  return tables;
}

/** What every point sets, by its number: the columns of what the sweep varies. */
function* pointRows({ targets, values }: Sweep): Iterable<Row> {
  yield ['point', ...targets.map(targetName)];
  for (const [point, row] of values.entries()) yield [point, ...row];
}

const once = <T>(make: () => T): (() => T) => {
  let made: { value: T } | undefined;
  return () => (made ??= { value: make() }).value;
};

function* summaryRows({ replicates, times, observables }: EnsembleStatistics): Iterable<Row> {
  for (const { id, mean, meanStandardError, sd, sdStandardError } of observables)
    for (const [i, time] of times.entries())
      yield [id, time, replicates, mean[i]!, meanStandardError[i]!, sd[i]!, sdStandardError[i]!];
}

function* quantileRows({ times, observables }: EnsembleStatistics): Iterable<Row> {
  for (const { id, quantiles } of observables)
    for (const [i, time] of times.entries())
      yield [id, time, ...standardProbabilities.map((probability) => quantiles[probability]![i]!)];
}

function* histogramRows(summary: EnsembleSummary, times: number[], at: number[]): Iterable<Row> {
  for (const id of summary.observables)
    for (const gridPoint of at) {
      const { values, widths, counts } = distributionOf(summary, id, gridPoint);
      for (const [i, value] of values.entries()) yield [id, times[gridPoint]!, value, widths[i]!, counts[i]!];
    }
}

function* eventRows(pieces: Float64Array[]): Iterable<Row> {
  let replicate = 0;
  for (const piece of pieces) for (const events of piece) yield [replicate++, events];
}

interface TimedPassage extends PassageInput {
  times: Float64Array;
}

/** An empty mean: not every replicate passed; an empty quantile: not reached by the horizon, or not bounded by so few. */
function* passageRows(passages: TimedPassage[], horizon: number): Iterable<Row> {
  for (const { observable, direction, threshold, times } of passages) {
    const { replicates, passed, probability, restrictedMean, mean, quantiles } = passageEstimates(times, horizon);
    yield [
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
  for (const { observable, direction, threshold, times } of passages)
    for (const [replicate, time] of times.entries()) yield [observable, direction, threshold, replicate, time];
}

function* traceRows(points: PointEnsemble[], observables: string[], times: number[]): Iterable<Row> {
  yield ['point', 'replicate', 'time', ...observables];
  for (const [point, { traces }] of points.entries())
    for (const { replicate, values } of traces)
      for (const [i, time] of times.entries())
        yield [point, replicate, time, ...observables.map((_, observable) => values[observable * times.length + i]!)];
}

const blocksIn = (point: PointEnsemble, share: BlockShare) =>
  blocksOf({ shape: asSummary(point.summary).shape, share, records: recordsOfPoint(point) });

function* blockRows(point: PointEnsemble, share: BlockShare): Iterable<Row> {
  const events = joined(point.events);
  for (const { firstReplicate, replicates, digest } of blocksIn(point, share)) {
    const sum = events.subarray(firstReplicate, firstReplicate + replicates).reduce((total, value) => total + value, 0);
    yield [firstReplicate, replicates, sum, digest];
  }
}

function* blockSumRows(point: PointEnsemble, share: BlockShare, times: number[]): Iterable<Row> {
  const { observables } = asSummary(point.summary).shape;
  for (const { firstReplicate, sums } of blocksIn(point, share))
    for (const [observable, { id, kind }] of observables.entries())
      for (const [gridPoint, time] of times.entries())
        yield [firstReplicate, id, time, ...powerSumTexts(sums.sums(observable, gridPoint), scaleOf(kind))];
}

/** Pairs in order of the observables asked for. */
function* covarianceRows(summary: Summary, times: number[]): Iterable<Row> {
  const { observables, pairs = [] } = summary.shape;
  for (const [pair, [first, second]] of pairs.entries())
    for (const [gridPoint, time] of times.entries()) {
      const moments = crossMomentsAt(summary, pair, gridPoint);
      yield [
        observables[first]!.id,
        observables[second]!.id,
        time,
        moments.covariance,
        moments.covarianceStandardError,
        moments.correlation,
        moments.correlationStandardError,
      ];
    }
}

function* blockCrossSumRows(point: PointEnsemble, share: BlockShare, times: number[]): Iterable<Row> {
  const { observables, pairs = [] } = asSummary(point.summary).shape;
  for (const { firstReplicate, sums } of blocksIn(point, share))
    for (const [pair, [first, second]] of pairs.entries())
      for (const [gridPoint, time] of times.entries()) {
        const ids = [observables[first]!.id, observables[second]!.id];
        yield [firstReplicate, ...ids, time, ...sums.crossSums(pair, gridPoint).map(String)];
      }
}

const powerSumTexts = (sums: bigint[], scale: bigint): string[] => sums.map((sum) => sumText(sum, scale));
