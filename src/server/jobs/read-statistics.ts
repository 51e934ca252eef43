/** Estimates with their errors at every grid time, over the complete prefix as it stands. */
import type { StatisticsDocument } from '@/contracts/jobs.ts';
import { gridTimes } from '@/domain/jobs/result-outputs.ts';
import { accept, type Result } from '@/domain/refusals.ts';
import type { Actor } from '@/domain/teams/actor.ts';
import { statisticsOf } from '@/engine/statistics/statistics-of.ts';
import { openResults } from './open-results.ts';

export async function readStatistics(options: {
  actor: Actor;
  team: string;
  job: string;
  point: number;
}): Promise<Result<StatisticsDocument>> {
  const opened = await openResults(options);
  if (!opened.ok) return opened;
  const { job, summary } = opened.value;
  const statistics = statisticsOf(summary, gridTimes(job.inputs.horizon, job.inputs.gridIntervals));
  return accept(withoutNaN(statistics));
}

/** JSON has no NaN: a number that so few replicates cannot give is null. */
function withoutNaN(statistics: ReturnType<typeof statisticsOf>): StatisticsDocument {
  const orNull = (values: number[]) => values.map((value) => (Number.isFinite(value) ? value : null));
  const { sdPerReplicate } = statistics.events;
  return {
    ...statistics,
    observables: statistics.observables.map((observable) => ({
      ...observable,
      sd: orNull(observable.sd),
      meanStandardError: orNull(observable.meanStandardError),
      sdStandardError: orNull(observable.sdStandardError),
      fano: orNull(observable.fano),
      fanoStandardError: orNull(observable.fanoStandardError),
      cv: orNull(observable.cv),
      cvStandardError: orNull(observable.cvStandardError),
    })),
    events: { ...statistics.events, sdPerReplicate: Number.isFinite(sdPerReplicate) ? sdPerReplicate : null },
  };
}
