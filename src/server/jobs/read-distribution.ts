/** How often each value of one observable occurred at the grid time nearest to the one asked for. */
import { gridTimes } from '@/domain/jobs/result-outputs.ts';
import { accept, refuse, type Result } from '@/domain/refusals.ts';
import type { Actor } from '@/domain/teams/actor.ts';
import type { Distribution } from '@/engine/ensemble.ts';
import { distributionOf } from '@/engine/statistics/distribution-of.ts';
import { modeEvidence, sampleSize, uniformDips, type ModeEvidence } from '@/engine/statistics/mode-evidence.ts';
import { openResults } from './open-results.ts';

export async function readDistribution(options: {
  actor: Actor;
  team: string;
  job: string;
  observable: string;
  time: number;
  point: number;
}): Promise<
  Result<Distribution & { replicates: number; observable: string; time: number; modes: ModeEvidence | null }>
> {
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
  const distribution = distributionOf(summary, observable, gridPoint);
  return accept({
    replicates: summary.replicates,
    observable,
    time: gridTimes(horizon, gridIntervals)[gridPoint]!,
    ...distribution,
    modes: modeEvidence(distribution, dipsFor(job.seed, summary.replicates)),
  });
}

/** Uniform samples take some tenths of a second to draw, and every time and observable of a job is compared with the same. */
const keptMost = 20;
const kept = new Map<string, Float64Array>();

function dipsFor(seed: string, replicates: number): Float64Array {
  const key = `${seed} ${sampleSize(replicates)}`;
  const dips = kept.get(key) ?? uniformDips(seed, replicates);
  kept.delete(key);
  kept.set(key, dips);
  for (const [oldest] of kept) if (kept.size > keptMost) kept.delete(oldest);
  return dips;
}
