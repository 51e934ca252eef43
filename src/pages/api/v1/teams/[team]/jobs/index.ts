import { launchJob as launchContract, listJobs as listContract } from '@/contracts/jobs.ts';
import { endpoint } from '@/server/http/endpoint.ts';
import { launchJob } from '@/server/jobs/launch-job.ts';
import { listJobs } from '@/server/jobs/list-jobs.ts';

export const GET = endpoint(listContract, ({ actor, parameters, query }) =>
  listJobs({ actor, team: parameters['team']!, ...query }),
);
export const POST = endpoint(launchContract, ({ actor, parameters, body }) =>
  launchJob({ actor, team: parameters['team']!, ...body }),
);
