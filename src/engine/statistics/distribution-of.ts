/** The distribution of an observable at a grid time, from a summary. */
import type { Distribution, EnsembleSummary } from '../ensemble.ts';
import { binRange } from './bins.ts';
import { realBinRange } from './real-cells.ts';
import { asSummary } from './statistics-of.ts';

/**
 * Occupied values in growing order. A count below 4096 stands for itself (width 1); `values[i]` of a wider bin is its least
 * count, of a real number's bin the edge nearer to zero. Throws RangeError on an unknown observable or grid point.
 */
export function distributionOf(ensemble: EnsembleSummary, observableId: string, gridPoint: number): Distribution {
  const summary = asSummary(ensemble);
  const { kind, cell } = summary.cell(summary.observables.indexOf(observableId), gridPoint);
  const distribution: Distribution = { values: [], widths: [], counts: [] };
  const push = (value: number, width: number, count: number): void => {
    distribution.values.push(value);
    distribution.widths.push(width);
    distribution.counts.push(count);
  };
  if (kind === 'count') {
    const { first, counts } = summary.counts.window(cell);
    counts.forEach((count, i) => {
      const { least, width } = binRange(first + i);
      if (count > 0) push(least, width, count);
    });
  } else {
    for (const [bin, count] of summary.reals.bins(cell)) {
      const { edge, width } = realBinRange(bin);
      push(edge, width, count);
    }
  }
  return distribution;
}
