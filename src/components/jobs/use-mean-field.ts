/** The mean field of a job, solved in this browser by the same engine, once it is wished for. */
import { useQuery } from '@tanstack/react-query';
import type { JobDocument } from '@/contracts/jobs.ts';
import { overridesAt } from '@/domain/jobs/sweep.ts';
import type { NetworkDocument } from '@/domain/network/document.ts';
import type { MeanFieldAnswer, MeanFieldTask } from './mean-field-protocol.ts';

function solveBeside(task: MeanFieldTask, signal: AbortSignal): Promise<MeanFieldAnswer> {
  return new Promise((resolve, reject) => {
    const worker = new Worker(new URL('./mean-field.worker.ts', import.meta.url), { type: 'module' });
    const end = (): void => worker.terminate();
    worker.onmessage = ({ data }: MessageEvent<MeanFieldAnswer>) => {
      resolve(data);
      end();
    };
    worker.onerror = () => {
      reject(new Error('The rate equations could not be solved in this browser.'));
      end();
    };
    signal.addEventListener('abort', end);
    worker.postMessage(task);
  });
}

/** `network` null: the reader may not see the model, so there is nothing to solve. */
export function useMeanField(job: JobDocument, point: number, network: NetworkDocument | null, wished: boolean) {
  const query = useQuery({
    queryKey: ['mean-field', job.id, point],
    enabled: wished && network !== null,
    staleTime: Infinity,
    retry: false,
    refetchOnWindowFocus: false,
    queryFn: ({ signal }) => {
      const { horizon, gridIntervals } = job;
      const overrides = overridesAt({ overrides: job.overrides, sweep: job.sweep ?? undefined }, point);
      return solveBeside({ network: network!, overrides, horizon, gridIntervals }, signal);
    },
  });
  const answer = query.data;
  return {
    solving: wished && query.isFetching,
    curves: wished && answer?.ok ? answer : null,
    problem: !wished ? null : answer && !answer.ok ? answer.message : (query.error?.message ?? null),
  };
}
