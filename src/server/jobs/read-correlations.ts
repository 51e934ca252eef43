/** Covariances and correlations of the observables that a job noted them of, over the complete prefix as it stands. */
import type { CorrelationsDocument } from '@/contracts/jobs.ts';
import { gridTimes } from '@/domain/jobs/result-outputs.ts';
import { accept, type Result } from '@/domain/refusals.ts';
import type { Actor } from '@/domain/teams/actor.ts';
import { crossMomentsAt } from '@/engine/statistics/cross-statistics.ts';
import { asSummary } from '@/engine/statistics/statistics-of.ts';
import { openResults } from './open-results.ts';

export async function readCorrelations(options: {
  actor: Actor;
  team: string;
  job: string;
  point: number;
}): Promise<Result<CorrelationsDocument>> {
  const opened = await openResults(options);
  if (!opened.ok) return opened;
  const { horizon, gridIntervals } = opened.value.job.inputs;
  const summary = asSummary(opened.value.summary);
  const { observables, pairs = [] } = summary.shape;
  const times = gridTimes(horizon, gridIntervals);
  return accept({
    replicates: summary.replicates,
    times,
    pairs: pairs.map(([first, second], pair): CorrelationsDocument['pairs'][number] => {
      const moments = times.map((_, gridPoint) => crossMomentsAt(summary, pair, gridPoint));
      return {
        observables: [observables[first]!.id, observables[second]!.id],
        covariance: moments.map(({ covariance }) => finite(covariance)),
        covarianceStandardError: moments.map(({ covarianceStandardError }) => finite(covarianceStandardError)),
        correlation: moments.map(({ correlation }) => finite(correlation)),
        correlationStandardError: moments.map(({ correlationStandardError }) => finite(correlationStandardError)),
      };
    }),
  });
}

/** JSON has no NaN. */
const finite = (value: number): number | null => (Number.isFinite(value) ? value : null);
