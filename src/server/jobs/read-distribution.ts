/** How often each value of one observable occurred at the grid time nearest to the one asked for. */
import { gridTimes } from '@/domain/jobs/result-outputs.ts';
import { accept, refuse, type Result } from '@/domain/refusals.ts';
import type { Actor } from '@/domain/teams/actor.ts';
import type { Distribution } from '@/engine/ensemble.ts';
import { distributionOf } from '@/engine/statistics/distribution-of.ts';
import { openResults } from './open-results.ts';

export async function readDistribution(options: {
  actor: Actor;
  team: string;
  job: string;
  observable: string;
  time: number;
  point: number;
}): Promise<Result<Distribution & { replicates: number; observable: string; time: number }>> {
  const opened = await openResults(options);
  if (!opened.ok) return opened;
  const { summary, job } = opened.value;
  const { observable, time } = options;
  if (!summary.observables.includes(observable))
    return refuse('invalid_input', `This job has no observable “${observable}”.`, {
      errors: [
        { path: 'query.observable', code: 'unknown_observable', message: `One of: ${summary.observables.join(', ')}.` },
      ],
    });
  const { horizon, gridIntervals } = job.inputs;
  if (time > horizon)
    return refuse('invalid_input', `The job ends at ${horizon}.`, {
      errors: [{ path: 'query.time', code: 'too_large', message: `At most ${horizon}.` }],
    });
  const gridPoint = Math.round((time / horizon) * gridIntervals);
  return accept({
    replicates: summary.replicates,
    observable,
    time: gridTimes(horizon, gridIntervals)[gridPoint]!,
    ...distributionOf(summary, observable, gridPoint),
  });
}
