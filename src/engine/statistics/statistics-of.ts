/** Estimates with their errors at every grid time, from a summary. */
import type { EnsembleStatistics, EnsembleSummary } from '../ensemble.ts';
import { momentsOf, type Moments } from './moments.ts';
import { quantile, standardProbabilities } from './quantile.ts';
import { realSumScale } from './real-cells.ts';
import { Summary } from './summary.ts';

/** The concrete summary behind the interface; throws TypeError on anything else. */
export function asSummary(summary: EnsembleSummary): Summary {
  if (!(summary instanceof Summary)) throw new TypeError('not a summary of this engine');
  return summary;
}

/** Moments of an observable at a grid point. */
export function momentsAt(summary: Summary, observable: number, gridPoint: number): Moments {
  const { kind, cell } = summary.cell(observable, gridPoint);
  return kind === 'count'
    ? momentsOf(summary.replicates, summary.counts.sums(cell))
    : momentsOf(summary.replicates, summary.reals.sums(cell), realSumScale);
}

/**
 * `times` are the grid times (gridTimes of exact/direct-method.ts). Numbers that do not exist for so few replicates are NaN:
 * everything without a replicate, standard deviations and errors below two.
 */
export function statisticsOf(ensemble: EnsembleSummary, times: ArrayLike<number>): EnsembleStatistics {
  const summary = asSummary(ensemble);
  if (times.length !== summary.gridPoints) throw new RangeError('times and summary have different lengths');
  const points = Array.from({ length: summary.gridPoints }, (_, point) => point);
  const observables = summary.observables.map((id, observable) => {
    const moments = points.map((point) => momentsAt(summary, observable, point));
    const quantiles: Record<string, number[]> = {};
    for (const probability of standardProbabilities)
      quantiles[probability] = points.map((point) => quantile(summary, observable, point, probability));
    return {
      id,
      mean: moments.map(({ mean }) => mean),
      sd: moments.map(({ sd }) => sd),
      meanStandardError: moments.map(({ meanStandardError }) => meanStandardError),
      sdStandardError: moments.map(({ sdStandardError }) => sdStandardError),
      fano: moments.map(({ fano }) => fano),
      fanoStandardError: moments.map(({ fanoStandardError }) => fanoStandardError),
      cv: moments.map(({ cv }) => cv),
      cvStandardError: moments.map(({ cvStandardError }) => cvStandardError),
      quantiles,
    };
  });
  return { replicates: summary.replicates, times: Array.from(times), observables, events: eventStatistics(summary) };
}

function eventStatistics({ replicates, eventSum, eventSquareSum }: Summary): EnsembleStatistics['events'] {
  const { mean, sd } = momentsOf(replicates, [eventSum, eventSquareSum, 0n, 0n]);
  return { total: Number(eventSum), meanPerReplicate: mean, sdPerReplicate: sd };
}
