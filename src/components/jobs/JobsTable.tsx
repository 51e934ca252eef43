/** Jobs of the team, newest first, followed while any of them runs. */
import { useQuery } from '@tanstack/react-query';
import { useMemo } from 'react';
import { callApi } from '@/components/api/call-api.ts';
import { Credits, Moment } from '@/components/ui/Amounts.tsx';
import { JobStateLabel } from '@/components/ui/StateLabel.tsx';
import { QueryProvider } from '@/components/ui/QueryProvider.tsx';
import { Table, type Column } from '@/components/ui/Table.tsx';
import { countText, durationText } from '@/components/ui/amounts-text.ts';
import { listJobs, type JobDocument } from '@/contracts/jobs.ts';
import { paths } from '@/paths.ts';
import { isOver } from './job-words.ts';

const askEveryMs = 4_000;

export interface JobsTableProps {
  team: string;
  timeZone: string;
  jobs: JobDocument[];
  /** The filters and page that `jobs` answered. */
  query: Record<string, string>;
}

export function JobsTable(props: JobsTableProps) {
  return (
    <QueryProvider>
      <Jobs {...props} />
    </QueryProvider>
  );
}

function Jobs({ team, timeZone, jobs: initial, query }: JobsTableProps) {
  const { data: jobs } = useQuery({
    queryKey: ['jobs', team, query],
    initialData: initial,
    staleTime: askEveryMs,
    refetchInterval: ({ state }) => (state.data?.every(isOver) ? false : askEveryMs),
    queryFn: async ({ signal }) => {
      const called = await callApi(listJobs, { path: { team }, query, signal });
      if (!called.ok) throw new Error(called.problem.detail);
      return called.value.jobs;
    },
  });
  const columns = useMemo((): Column<JobDocument>[] => {
    return [
      {
        id: 'name',
        title: 'Job',
        cell: (job) => (
          <>
            <a className="link font-semibold [overflow-wrap:anywhere]" href={paths.job(team, job.id)}>
              {job.name}
            </a>
            <span className="block text-xs text-soft">
              {job.model.name}, version {job.model.versionNumber}
            </span>
          </>
        ),
      },
      { id: 'state', title: 'State', cell: (job) => <State job={job} /> },
      {
        id: 'replicates',
        title: 'Replicates',
        figure: true,
        cell: (job) =>
          job.replicatesDone === job.replicatesPlanned
            ? countText(job.replicatesDone)
            : `${countText(job.replicatesDone)} of ${countText(job.replicatesPlanned)}`,
      },
      {
        id: 'charge',
        title: 'Charged',
        figure: true,
        cell: (job) => <Credits microcredits={job.chargedMicrocredits} />,
      },
      { id: 'project', title: 'Project', cell: (job) => job.projectCode?.code ?? '' },
      { id: 'who', title: 'Launched by', cell: (job) => job.launchedBy.name },
      { id: 'when', title: 'Launched', cell: (job) => <Moment time={job.createdAt} timeZone={timeZone} /> },
    ];
  }, [team, timeZone]);
  return <Table caption="Jobs" columns={columns} rows={jobs} rowKey={({ id }) => id} />;
}

function State({ job }: { job: JobDocument }) {
  return (
    <>
      <JobStateLabel state={job.state} />
      {job.state === 'running' && job.secondsLeft !== null && (
        <span className="block text-xs text-soft">{durationText(job.secondsLeft)} left</span>
      )}
    </>
  );
}
