/** First passages of a job: estimates with their errors over the complete prefix as it stands. */
import type { PassagesDocument } from '@/contracts/jobs.ts';
import { gridTimes } from '@/domain/jobs/result-outputs.ts';
import { accept, type Result } from '@/domain/refusals.ts';
import type { Actor } from '@/domain/teams/actor.ts';
import { joined } from '@/engine/statistics/block-collector.ts';
import { passageCurve, passageEstimates } from '@/engine/statistics/first-passage.ts';
import { openResults } from './open-results.ts';

export async function readPassages(options: {
  actor: Actor;
  team: string;
  job: string;
  point: number;
}): Promise<Result<PassagesDocument>> {
  const opened = await openResults(options);
  if (!opened.ok) return opened;
  const { job, ensemble, replicates } = opened.value;
  const { horizon, gridIntervals, passages = [] } = job.inputs;
  const times = gridTimes(horizon, gridIntervals);
  return accept({
    replicates,
    horizon,
    times,
    passages: passages.map((passage, index) => {
      const found = joined(ensemble.passages[index] ?? []);
      const { passed, probability, restrictedMean, mean, quantiles } = passageEstimates(found, horizon);
      return {
        ...passage,
        passed,
        probability,
        restrictedMean: withNull(restrictedMean),
        mean: mean && withNull(mean),
        quantiles: Object.fromEntries(
          Object.entries(quantiles).map(([p, { value, lower, upper }]) => [
            p,
            { value: finite(value), lower: finite(lower), upper: finite(upper) },
          ]),
        ),
        curve: passageCurve(found, times),
      };
    }),
  });
}

/** JSON has neither NaN nor infinity. */
const finite = (value: number): number | null => (Number.isFinite(value) ? value : null);
const withNull = ({ value, standardError }: { value: number; standardError: number }) => ({
  value,
  standardError: finite(standardError),
});
