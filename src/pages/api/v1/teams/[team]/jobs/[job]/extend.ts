import { extendJob as contract } from '@/contracts/jobs.ts';
import { endpoint } from '@/server/http/endpoint.ts';
import { extendJob } from '@/server/jobs/extend-job.ts';

export const POST = endpoint(contract, ({ actor, parameters, body }) =>
  extendJob({ actor, team: parameters['team']!, job: parameters['job']!, ...body }),
);
