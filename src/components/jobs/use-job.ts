/** A job as it stands, live: server-sent events, and asking every few seconds where those do not come through. */
import { useEffect, useState } from 'react';
import { callApi, urlOf } from '@/components/api/call-api.ts';
import { announceBalanceChange } from '@/components/ui/column-events.ts';
import { jobProgress, readJob, type JobDocument } from '@/contracts/jobs.ts';
import { isOver } from './job-words.ts';

const askEveryMs = 3_000;

export type Connection = 'live' | 'asking' | 'lost';

export function useJob(team: string, initial: JobDocument) {
  const [job, setJob] = useState(initial);
  const [connection, setConnection] = useState<Connection>('live');
  const over = isOver(job);
  const path = { team, job: initial.id };

  useEffect(() => {
    if (over) return;
    let closed = false;
    let asking: ReturnType<typeof setInterval> | null = null;
    const take = (next: JobDocument): void => {
      if (closed) return;
      setJob(next);
      if (isOver(next)) announceBalanceChange();
    };
    const ask = async (): Promise<void> => {
      const called = await callApi(readJob, { path });
      if (closed) return;
      setConnection(called.ok ? 'asking' : 'lost');
      if (called.ok) take(called.value.job);
    };
    const startAsking = (): void => {
      asking ??= setInterval(() => void ask(), askEveryMs);
    };
    const stopAsking = (): void => {
      if (asking !== null) clearInterval(asking);
      asking = null;
    };
    const source = new EventSource(urlOf(jobProgress, path));
    source.addEventListener('open', () => {
      stopAsking();
      setConnection('live');
    });
    source.addEventListener('job', (event) => take(JSON.parse((event as MessageEvent<string>).data) as JobDocument));
    source.addEventListener('error', () => {
      // The browser tries again by itself unless the server refused; ask meanwhile in any case.
      startAsking();
      void ask();
    });
    return () => {
      closed = true;
      source.close();
      stopAsking();
    };
    // eslint-disable-next-line react-hooks/exhaustive-deps
  }, [over, team, initial.id]);

  return { job, connection, setJob };
}

/** Seconds left without jumps: each estimate moves what is shown only part of the way. */
export function useCalmSeconds(estimate: number | null): number | null {
  const [shown, setShown] = useState(estimate);
  useEffect(() => {
    setShown((before) => (estimate === null || before === null ? estimate : before + 0.35 * (estimate - before)));
  }, [estimate]);
  return shown;
}
