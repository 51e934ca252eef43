import { jobProgress as contract } from '@/contracts/jobs.ts';
import { endpoint } from '@/server/http/endpoint.ts';
import { streamProgress } from '@/server/jobs/stream-progress.ts';

export const GET = endpoint(contract, async ({ actor, parameters, context }) => {
  const { signal } = context.request;
  const stream = await streamProgress({ actor, team: parameters['team']!, job: parameters['job']!, signal });
  return stream.ok ? stream.value : stream;
});
