/** A job from its queue to its archive: progress that becomes results. */
import { QueryProvider } from '@/components/ui/QueryProvider.tsx';
import type { JobDocument } from '@/contracts/jobs.ts';
import type { NetworkDocument } from '@/domain/network/document.ts';
import { JobAside } from './JobAside.tsx';
import { JobOutcome } from './JobOutcome.tsx';
import { JobProgress } from './JobProgress.tsx';
import { JobResults } from './JobResults.tsx';
import { useJob } from './use-job.ts';

export interface JobPageProps {
  team: string;
  timeZone: string;
  job: JobDocument;
  /** Names of observables that have one, by id. */
  names: Record<string, string>;
  /** The model version, for the mean field; null when the reader may not see it. */
  network: NetworkDocument | null;
  mayLaunch: boolean;
  mayReadResults: boolean;
}

export function JobPage(props: JobPageProps) {
  return (
    <QueryProvider>
      <LiveJob {...props} />
    </QueryProvider>
  );
}

function LiveJob({ team, timeZone, names, network, mayLaunch, mayReadResults, job: initial }: JobPageProps) {
  const { job, connection, setJob } = useJob(team, initial);
  return (
    <div className="gap-10 xl:grid xl:grid-cols-[minmax(0,1fr)_19rem]">
      <div className="min-w-0 space-y-6">
        <JobProgress {...{ team, job, connection }} />
        <JobOutcome job={job} />
        {mayReadResults && <JobResults {...{ team, job, names, network }} />}
      </div>
      <div className="mt-10 xl:mt-0 xl:border-l xl:border-rule xl:pl-8">
        <JobAside {...{ team, timeZone, job, names, mayLaunch, mayReadResults }} onJob={setJob} />
      </div>
    </div>
  );
}
