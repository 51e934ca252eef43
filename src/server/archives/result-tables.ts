/**
 * The tables under `results/`, row by row. Their bytes depend on the job's inputs and its delivered replicates alone.
 *
 * Numbers are written with the fewest digits that read back as the same double; a number that does not exist for so few
 * replicates is an empty field.
 */
import { stringify } from 'csv-stringify/sync';
import { gridTimes, histogramTimes } from '@/domain/jobs/result-outputs.ts';
import type { JobInputs } from '@/domain/jobs/job-inputs.ts';
import type { EnsembleStatistics, EnsembleSummary } from '@/engine/ensemble.ts';
import { distributionOf } from '@/engine/statistics/distribution-of.ts';
import { statisticsOf } from '@/engine/statistics/statistics-of.ts';
import type { PrefixEnsemble } from '../jobs/prefix-ensemble.ts';

type Cell = string | number;
type Row = Cell[];

export interface ResultTable {
  path: string;
  rows: () => Iterable<Row>;
}

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

export function resultTables(options: { inputs: JobInputs; ensemble: PrefixEnsemble }): ResultTable[] {
  const { inputs, ensemble } = options;
  if (!ensemble.summary) throw new Error('An empty prefix has no results.');
  const summary = ensemble.summary;
  const times = gridTimes(inputs.horizon, inputs.gridIntervals);
  const statistics = statisticsOf(summary, times);
  const tables: ResultTable[] = [
    { path: 'results/summary.csv', rows: () => summaryRows(statistics) },
    { path: 'results/quantiles.csv', rows: () => quantileRows(statistics) },
    { path: 'results/histograms.csv', rows: () => histogramRows(summary, times, histogramTimes(inputs.gridIntervals)) },
    { path: 'results/events.csv', rows: () => eventRows(ensemble.events) },
  ];
  if (ensemble.traces.length > 0)
    tables.push({ path: 'results/traces.csv', rows: () => traceRows(ensemble, summary.observables, times) });
  return tables;
}

function* summaryRows({ replicates, times, observables }: EnsembleStatistics): Iterable<Row> {
  yield ['point', 'observable', 'time', 'replicates', 'mean', 'mean_standard_error', 'sd', 'sd_standard_error'];
  for (const { id, mean, meanStandardError, sd, sdStandardError } of observables)
    for (const [i, time] of times.entries())
      yield [0, id, time, replicates, mean[i]!, meanStandardError[i]!, sd[i]!, sdStandardError[i]!];
}

function* quantileRows({ times, observables }: EnsembleStatistics): Iterable<Row> {
  const probabilities = Object.keys(observables[0]?.quantiles ?? {});
  yield ['point', 'observable', 'time', ...probabilities.map((probability) => `q${probability}`)];
  for (const { id, quantiles } of observables)
    for (const [i, time] of times.entries())
      yield [0, id, time, ...probabilities.map((probability) => quantiles[probability]![i]!)];
}

function* histogramRows(summary: EnsembleSummary, times: number[], at: number[]): Iterable<Row> {
  yield ['point', 'observable', 'time', 'value', 'width', 'count'];
  for (const id of summary.observables)
    for (const gridPoint of at) {
      const { values, widths, counts } = distributionOf(summary, id, gridPoint);
      for (const [i, value] of values.entries()) yield [0, id, times[gridPoint]!, value, widths[i]!, counts[i]!];
    }
}

function* eventRows(pieces: Float64Array[]): Iterable<Row> {
  yield ['point', 'replicate', 'events'];
  let replicate = 0;
  for (const piece of pieces) for (const events of piece) yield [0, replicate++, events];
}

function* traceRows({ traces }: PrefixEnsemble, observables: string[], times: number[]): Iterable<Row> {
  yield ['point', 'replicate', 'time', ...observables];
  for (const { replicate, values } of traces)
    for (const [i, time] of times.entries())
      yield [0, replicate, time, ...observables.map((_, observable) => values[observable * times.length + i]!)];
}
