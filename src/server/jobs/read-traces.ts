/** The first whole traces of a job, on the grid. */
import { gridTimes } from '@/domain/jobs/result-outputs.ts';
import { accept, type Result } from '@/domain/refusals.ts';
import type { Actor } from '@/domain/teams/actor.ts';
import { openResults } from './open-results.ts';

export async function readTraces(options: {
  actor: Actor;
  team: string;
  job: string;
  point: number;
  limit?: number | undefined;
}): Promise<Result<{ times: number[]; observables: string[]; traces: { replicate: number; values: number[][] }[] }>> {
  const opened = await openResults(options);
  if (!opened.ok) return opened;
  const { job, ensemble, summary } = opened.value;
  const times = gridTimes(job.inputs.horizon, job.inputs.gridIntervals);
  const traces = ensemble.traces.slice(0, options.limit).map(({ replicate, values }) => ({
    replicate,
    values: summary.observables.map((_, observable) =>
      Array.from(values.subarray(observable * times.length, (observable + 1) * times.length)),
    ),
  }));
  return accept({ times, observables: summary.observables, traces });
}
