import { cancelJob as contract } from '@/contracts/jobs.ts';
import { endpoint } from '@/server/http/endpoint.ts';
import { cancelJob } from '@/server/jobs/cancel-job.ts';

export const POST = endpoint(contract, ({ actor, parameters }) =>
  cancelJob({ actor, team: parameters['team']!, job: parameters['job']! }),
);
