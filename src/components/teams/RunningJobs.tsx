/** Jobs that run or wait, kept up to date; when one ends the page is asked to show it among the finished. */
import { useQuery } from '@tanstack/react-query';
import { useEffect, useRef } from 'react';
import { callApi } from '@/components/api/call-api.ts';
import { countText, creditsText, durationText } from '@/components/ui/amounts-text.ts';
import { announceBalanceChange } from '@/components/ui/column-events.ts';
import { ProgressBar } from '@/components/ui/Progress.tsx';
import { QueryProvider } from '@/components/ui/QueryProvider.tsx';
import { JobStateLabel } from '@/components/ui/StateLabel.tsx';
import { listJobs, type JobDocument } from '@/contracts/jobs.ts';
import { paths } from '@/paths.ts';

const refreshMs = 2_000;

export function RunningJobs(props: { team: string; initial: JobDocument[] }) {
  return (
    <QueryProvider>
      <List {...props} />
    </QueryProvider>
  );
}

function List({ team, initial }: { team: string; initial: JobDocument[] }) {
  const { data: jobs, isError } = useQuery({
    queryKey: ['running-jobs', team],
    queryFn: async ({ signal }) => {
      const called = await callApi(listJobs, { path: { team }, query: { state: 'queued,running', limit: 20 }, signal });
      if (!called.ok) throw new Error(called.problem.detail);
      return called.value.jobs;
    },
    initialData: initial,
    refetchInterval: (query) => ((query.state.data?.length ?? 0) > 0 ? refreshMs : false),
  });
  const before = useRef(jobs.length);
  useEffect(() => {
    if (jobs.length < before.current) {
      announceBalanceChange();
      window.location.reload();
    }
    before.current = jobs.length;
  }, [jobs.length]);
  if (jobs.length === 0) return <p className="border-t border-rule py-3 text-soft">Nothing runs at the moment.</p>;
  return (
    <>
      <ul className="border-t border-ink">
        {jobs.map((job) => (
          <li key={job.id} className="border-b border-rule py-3">
            <div className="flex flex-wrap items-baseline justify-between gap-x-6">
              <a className="link min-w-0 font-semibold [overflow-wrap:anywhere]" href={paths.job(team, job.id)}>
                {job.name}
              </a>
              <JobStateLabel state={job.state} />
            </div>
            <div className="my-2">
              <ProgressBar value={job.replicatesDone} max={job.replicatesPlanned} label={`Replicates of ${job.name}`} />
            </div>
            <p className="flex flex-wrap justify-between gap-x-6 text-sm text-soft">
              <span>
                {countText(job.replicatesDone)} of {countText(job.replicatesPlanned)} replicates ·{' '}
                {creditsText(job.chargedMicrocredits)} of at most {creditsText(job.capMicrocredits)} credits
              </span>
              {job.secondsLeft !== null && <span>{durationText(job.secondsLeft)} left</span>}
            </p>
          </li>
        ))}
      </ul>
      {isError && (
        <p className="mt-2 text-sm text-methyl">The list could not be read again; it shows the last known state.</p>
      )}
    </>
  );
}
