/** One number at every point of a sweep, with its 95 % interval, over the complete prefix as it stands. */
import type { PointEnsemble } from '@/archives/ensemble.ts';
import type { SweepResultsDocument } from '@/contracts/job-sweep.ts';
import { accept, refuse, type Result } from '@/domain/refusals.ts';
import type { Actor } from '@/domain/teams/actor.ts';
import { joined } from '@/engine/statistics/block-collector.ts';
import { passageEstimates } from '@/engine/statistics/first-passage.ts';
import { asSummary, momentsAt } from '@/engine/statistics/statistics-of.ts';
import { normal95 } from '@/engine/statistics/wilson.ts';
import { openResults } from './open-results.ts';

type Value = SweepResultsDocument['values'][number];

export async function readSweepResults(options: {
  actor: Actor;
  team: string;
  job: string;
  statistic: SweepResultsDocument['statistic'];
  observable?: string | undefined;
  time?: number | undefined;
  passage: number;
}): Promise<Result<SweepResultsDocument>> {
  const opened = await openResults({ ...options, point: 0 });
  if (!opened.ok) return opened;
  const { job, points, replicates } = opened.value;
  const { sweep, horizon, gridIntervals, passages = [] } = job.inputs;
  if (!sweep) return unfit('job', 'no_sweep', 'This job has one point and no sweep.');
  const { statistic, observable, time = horizon, passage } = options;
  if (statistic === 'passed') {
    if (!(passage in passages))
      return unfit('query.passage', 'unknown_passage', 'This job notes no such first passage.');
    const values = points.map((point) => passageEstimates(joined(point.passages[passage]!), horizon).probability);
    return accept({ replicates, statistic, sweep, values });
  }
  const { observables } = points[0]!.summary;
  const place = observables.indexOf(observable ?? '');
  if (place < 0) return unfit('query.observable', 'unknown_observable', `One of: ${observables.join(', ')}.`);
  if (time > horizon) return unfit('query.time', 'too_large', `At most ${horizon}.`);
  const gridPoint = Math.round((time / horizon) * gridIntervals);
  const values = points.map((point) => valueAt(point, statistic, place, gridPoint));
  return accept({ replicates, statistic, sweep, values });
}

const unfit = (path: string, code: string, message: string): Result<never> =>
  refuse('invalid_input', message, { errors: [{ path, code, message }] });

/** Null where the number does not exist; without bounds where so few replicates give no error. */
function valueAt(
  { summary }: PointEnsemble,
  statistic: 'mean' | 'sd' | 'fano' | 'cv',
  observable: number,
  gridPoint: number,
): Value {
  const moments = momentsAt(asSummary(summary), observable, gridPoint);
  const value = moments[statistic];
  if (!Number.isFinite(value)) return null;
  const half = normal95 * moments[`${statistic}StandardError`];
  return Number.isFinite(half)
    ? { value, lower: value - half, upper: value + half }
    : { value, lower: null, upper: null };
}
