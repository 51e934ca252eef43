import { listArchiveFiles as contract } from '@/contracts/archives.ts';
import { listArchiveFiles } from '@/server/archives/list-archive-files.ts';
import { endpoint } from '@/server/http/endpoint.ts';

export const GET = endpoint(contract, ({ actor, parameters }) =>
  listArchiveFiles({ actor, team: parameters['team']!, job: parameters['job']! }),
);
