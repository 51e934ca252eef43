import { jobDistribution as contract } from '@/contracts/jobs.ts';
import { endpoint } from '@/server/http/endpoint.ts';
import { readDistribution } from '@/server/jobs/read-distribution.ts';

export const GET = endpoint(contract, ({ actor, parameters, query }) =>
  readDistribution({ actor, team: parameters['team']!, job: parameters['job']!, ...query }),
);
