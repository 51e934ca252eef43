import { downloadArchive as contract } from '@/contracts/archives.ts';
import { readArchive } from '@/server/archives/read-archive.ts';
import { endpoint } from '@/server/http/endpoint.ts';

export const GET = endpoint(contract, async ({ actor, parameters, context }) => {
  const { method, headers } = context.request;
  const archive = await readArchive({ actor, team: parameters['team']!, job: parameters['job']!, method, headers });
  return archive.ok ? archive.value : archive;
});
