/** The batch strip of a job with its words, live. */
import { useQuery } from '@tanstack/react-query';
import { useEffect } from 'react';
import { callApi } from '@/components/api/call-api.ts';
import { BatchStrip } from '@/components/ui/BatchStrip.tsx';
import type { Batch, BatchState } from '@/components/ui/batch-cells.ts';
import { JobStateLabel } from '@/components/ui/StateLabel.tsx';
import { countText, creditsText, durationText } from '@/components/ui/amounts-text.ts';
import { jobBatches, type JobDocument } from '@/contracts/jobs.ts';
import { isOver } from './job-words.ts';
import { useCalmSeconds, type Connection } from './use-job.ts';

const mostCells = 1_000;
const askEveryMs = 2_000;

const cellStates: Record<string, BatchState> = {
  waiting: 'waiting',
  running: 'running',
  computed: 'done',
  delivered: 'done',
  discarded: 'discarded',
};

export function JobProgress({ team, job, connection }: { team: string; job: JobDocument; connection: Connection }) {
  const over = isOver(job);
  const secondsLeft = useCalmSeconds(job.secondsLeft);
  const query = useQuery({
    queryKey: ['batches', job.id],
    refetchInterval: over ? false : askEveryMs,
    queryFn: async ({ signal }) => {
      const called = await callApi(jobBatches, { path: { team, job: job.id }, query: { cells: mostCells }, signal });
      if (!called.ok) throw new Error(called.problem.detail);
      return called.value.cells;
    },
  });
  const { refetch } = query;
  useEffect(() => void refetch(), [job.state, refetch]);

  const perEvent = job.events > 0 ? job.chargedMicrocredits / job.events : 0;
  const batches = (query.data ?? []).map((cell): Batch => ({
    point: 0,
    state: cellStates[cell.state] ?? 'waiting',
    replicates: cell.replicates,
    events: cell.events,
    chargedMicrocredits: cell.state === 'delivered' ? Math.round(cell.events * perEvent) : 0,
    seconds: cell.seconds,
  }));
  // Before the plan is known the strip is one waiting cell, so that nothing jumps.
  const shown: Batch[] =
    batches.length > 0
      ? batches
      : [
          {
            point: 0,
            state: over ? 'done' : 'waiting',
            replicates: job.replicatesPlanned,
            events: 0,
            chargedMicrocredits: 0,
            seconds: 0,
          },
        ];
  return (
    <div>
      <BatchStrip batches={shown} aside={<Aside {...{ job, connection, secondsLeft }} />}>
        <b className="font-semibold text-ink">
          {countText(job.replicatesDone)} of {countText(job.replicatesPlanned)}
        </b>{' '}
        replicates · <b className="font-semibold text-ink">{creditsText(job.chargedMicrocredits)}</b> credits ·{' '}
        <b className="font-semibold text-ink">{countText(job.events)}</b> events
      </BatchStrip>
      <p role="status" className="sr-only">
        {announcement(job)}
      </p>
    </div>
  );
}

function Aside({
  job,
  connection,
  secondsLeft,
}: {
  job: JobDocument;
  connection: Connection;
  secondsLeft: number | null;
}) {
  if (isOver(job)) return <JobStateLabel state={job.state} />;
  if (connection === 'lost')
    return <span className="text-methyl">no connection; the job goes on without this page</span>;
  if (job.phase === 'finishing') return <>statistics and archive are being written</>;
  if (job.state === 'queued') return <>waiting for its turn</>;
  return <>{secondsLeft === null ? 'time left not known yet' : `${durationText(secondsLeft)} left`}</>;
}

/** Said to a screen reader at every tenth of the way, not at every change. */
function announcement(job: JobDocument): string {
  if (isOver(job)) return `The job is over: ${countText(job.replicatesDone)} replicates.`;
  const tenths = Math.floor((10 * job.replicatesDone) / Math.max(1, job.replicatesPlanned));
  return `${tenths * 10} % of the replicates are done`;
}
