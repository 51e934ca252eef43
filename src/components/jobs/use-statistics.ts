/** The statistics of a job as far as it has come; every part of the page that asks shares one answer. */
import { keepPreviousData, useQuery } from '@tanstack/react-query';
import { useMemo } from 'react';
import { callApi } from '@/components/api/call-api.ts';
import { jobStatistics, type JobDocument } from '@/contracts/jobs.ts';
import { isOver } from './job-words.ts';
import { resultsOf, type Results } from './results-data.ts';

const askEveryMs = 4_000;

/** A finished job's numbers do not change; a new archive revision has new ones. */
export const stageOf = (job: JobDocument): string =>
  isOver(job) ? `${job.state} ${job.archive?.revision ?? 0} ${job.replicatesDone}` : 'running';

export function useStatistics(team: string, job: JobDocument, names: Record<string, string>, point = 0) {
  const over = isOver(job);
  const query = useQuery({
    queryKey: ['statistics', job.id, stageOf(job), point],
    enabled: job.replicatesDone > 0,
    placeholderData: keepPreviousData,
    refetchInterval: over ? false : askEveryMs,
    staleTime: over ? Infinity : askEveryMs / 2,
    queryFn: async ({ signal }) => {
      const called = await callApi(jobStatistics, { path: { team, job: job.id }, query: { point }, signal });
      if (called.ok) return called.value;
      if (called.problem.code === 'results_not_ready') return null;
      throw new Error(called.problem.detail);
    },
  });
  const { data } = query;
  const results: Results | null = useMemo(
    () => (data ? resultsOf(data, names, job.timeUnit) : null),
    [data, names, job.timeUnit],
  );
  return { results, problem: query.error?.message, askAgain: () => void query.refetch() };
}
