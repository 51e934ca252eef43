/** The progress of a job as server-sent events: its document after each change, until the job is over. */
import type { JobDocument } from '@/contracts/jobs.ts';
import { isFinal } from '@/domain/jobs/job-state.ts';
import { accept, type Result } from '@/domain/refusals.ts';
import type { Actor } from '@/domain/teams/actor.ts';
import { registerStream } from '../http/open-streams.ts';
import { log } from '../log.ts';
import { authorise } from '../teams/authorise.ts';
import { findJob } from './find-job.ts';
import { onJobChange } from './job-changes.ts';
import { presentJob } from './present-job.ts';

/** Changes closer together than this are told once. */
const quietMs = 200;
/** Keeps proxies from closing a stream on which nothing happens. */
const heartbeatMs = 15_000;

export async function streamProgress(options: {
  actor: Actor;
  team: string;
  job: string;
  signal: AbortSignal;
}): Promise<Result<Response>> {
  const authorised = await authorise({ actor: options.actor, team: options.team, permission: 'jobs:read' });
  if (!authorised.ok) return authorised;
  const found = await findJob({ teamId: authorised.value.team.id, job: options.job });
  if (!found.ok) return found;
  const read = async (): Promise<JobDocument> => presentJob(await found.value.reload());
  return accept(
    new Response(progressStream({ jobId: found.value.id, read, signal: options.signal }), {
      headers: {
        'Content-Type': 'text/event-stream',
        'Cache-Control': 'no-store',
        // Proxies that buffer by default must not.
        'X-Accel-Buffering': 'no',
      },
    }),
  );
}

function progressStream(options: {
  jobId: string;
  read: () => Promise<JobDocument>;
  signal: AbortSignal;
}): ReadableStream<Uint8Array> {
  const encoder = new TextEncoder();
  let end = (): void => undefined;
  return new ReadableStream({
    start(controller) {
      let over = false;
      let timer: NodeJS.Timeout | null = null;
      const send = (text: string): void => {
        if (!over) controller.enqueue(encoder.encode(text));
      };
      const tell = async (): Promise<void> => {
        timer = null;
        const job = await options.read();
        send(`event: job\ndata: ${JSON.stringify(job)}\n\n`);
        if (isFinal(job.state)) end();
      };
      const soon = (ms: number): void => {
        timer ??= setTimeout(() => {
          tell().catch((error: unknown) => {
            log().error({ err: error, jobId: options.jobId }, 'progress stream failed');
            end();
          });
        }, ms);
      };
      const stopListening = onJobChange(options.jobId, () => soon(quietMs));
      const heartbeat = setInterval(() => send(': still here\n\n'), heartbeatMs);
      end = () => {
        if (over) return;
        over = true;
        stopListening();
        forget();
        clearInterval(heartbeat);
        if (timer) clearTimeout(timer);
        options.signal.removeEventListener('abort', end);
        try {
          controller.close();
        } catch {
          // The reader went first.
        }
      };
      const forget = registerStream(() => end());
      options.signal.addEventListener('abort', end);
      send('retry: 2000\n\n');
      soon(0);
      if (options.signal.aborted) end();
    },
    cancel: () => end(),
  });
}
