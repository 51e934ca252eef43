/** The kept traces as Parquet: one row a replicate and grid time, one column an observable. */
import { gridTimes } from '@/domain/jobs/result-outputs.ts';
import type { JobInputs } from '@/domain/jobs/job-inputs.ts';
import { asSummary } from '@/engine/statistics/statistics-of.ts';
import { parquetPieces } from '@/formats/parquet/write-parquet.ts';
import type { Ensemble } from './ensemble.ts';

/** Rows of a row group, about: what readers take into memory at a time. */
const rowsPerGroup = 50_000;

export function tracesParquet(inputs: Pick<JobInputs, 'horizon' | 'gridIntervals'>, { points }: Ensemble) {
  const { observables } = asSummary(points[0]!.summary).shape;
  const times = gridTimes(inputs.horizon, inputs.gridIntervals);
  const perGroup = Math.max(1, Math.floor(rowsPerGroup / times.length));
  function* groups(): Iterable<number[][]> {
    const all = points.flatMap(({ traces }, point) => traces.map((trace) => ({ point, ...trace })));
    for (let from = 0; from < all.length; from += perGroup) {
      const traces = all.slice(from, from + perGroup);
      yield [
        traces.flatMap(({ point }) => times.map(() => point)),
        traces.flatMap(({ replicate }) => times.map(() => replicate)),
        traces.flatMap(() => times),
        ...observables.map((_, observable) =>
          traces.flatMap(({ values }) =>
            Array.from(values.subarray(observable * times.length, (observable + 1) * times.length)),
          ),
        ),
      ];
    }
  }
  return {
    path: 'results/traces.parquet',
    pieces: () =>
      parquetPieces(
        [
          { name: 'point', type: 'INT32' },
          { name: 'replicate', type: 'INT32' },
          { name: 'time', type: 'DOUBLE' },
          ...observables.map(({ id, kind }) => ({
            name: id,
            type: kind === 'count' ? ('INT32' as const) : ('DOUBLE' as const),
          })),
        ],
        groups(),
      ),
  };
}
