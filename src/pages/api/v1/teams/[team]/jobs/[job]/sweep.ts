import { readSweep as contract } from '@/contracts/job-sweep.ts';
import { endpoint } from '@/server/http/endpoint.ts';
import { readSweepResults } from '@/server/jobs/read-sweep-results.ts';

export const GET = endpoint(contract, ({ actor, parameters, query }) =>
  readSweepResults({ actor, team: parameters['team']!, job: parameters['job']!, ...query }),
);
