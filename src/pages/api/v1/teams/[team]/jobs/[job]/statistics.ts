import { jobStatistics as contract } from '@/contracts/jobs.ts';
import { endpoint } from '@/server/http/endpoint.ts';
import { readStatistics } from '@/server/jobs/read-statistics.ts';

export const GET = endpoint(contract, ({ actor, parameters, query }) =>
  readStatistics({ actor, team: parameters['team']!, job: parameters['job']!, ...query }),
);
