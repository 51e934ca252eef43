/** Why a job ended other than by running to its end, and what is there all the same. */
import { Notice } from '@/components/ui/Notice.tsx';
import { countText, creditsText } from '@/components/ui/amounts-text.ts';
import type { JobDocument } from '@/contracts/jobs.ts';
import { numberText } from '@/charts/number-text.ts';
import { failureWords } from './job-words.ts';

export function JobOutcome({ job }: { job: JobDocument }) {
  const kept = `${countText(job.replicatesDone)} complete ${job.replicatesDone === 1 ? 'replicate was' : 'replicates were'} kept and charged.`;
  switch (job.state) {
    case 'failed':
      return (
        <Notice still tone="failure" title="The job failed">
          <p>{failureWords(job) ?? job.stopDetail ?? 'The job could not be finished.'}</p>
          <p>
            {kept}
            {job.failure !== null && job.replicatesDone > 0 && ' The results are conditional on no failure.'}
          </p>
          {job.failure !== null && <FailureState state={job.failure.state} />}
        </Notice>
      );
    case 'stopped_at_cap':
      return (
        <Notice still tone="caution" title={`Stopped at the cap of ${creditsText(job.capMicrocredits)} credits`}>
          {job.stopDetail ?? kept}
        </Notice>
      );
    case 'cancelled':
      return (
        <Notice still title="Stopped on request">
          {job.stopDetail ?? kept}
        </Notice>
      );
    default:
      return null;
  }
}

/** Counts beyond these are in the archive. */
const shown = 24;

function FailureState({ state }: { state: Record<string, number> }) {
  const counts = Object.entries(state);
  return (
    <p className="mt-1">
      State there:{' '}
      {counts
        .slice(0, shown)
        .map(([id, count]) => `${id} = ${numberText(count, 6)}`)
        .join(', ')}
      {counts.length > shown && ` and ${counts.length - shown} more`}.
    </p>
  );
}
