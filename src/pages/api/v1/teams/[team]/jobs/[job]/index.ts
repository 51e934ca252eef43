import { readJob as contract } from '@/contracts/jobs.ts';
import { endpoint } from '@/server/http/endpoint.ts';
import { readJob } from '@/server/jobs/read-job.ts';

export const GET = endpoint(contract, ({ actor, parameters }) =>
  readJob({ actor, team: parameters['team']!, job: parameters['job']! }),
);
