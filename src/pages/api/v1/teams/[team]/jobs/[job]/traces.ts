import { jobTraces as contract } from '@/contracts/jobs.ts';
import { endpoint } from '@/server/http/endpoint.ts';
import { readTraces } from '@/server/jobs/read-traces.ts';

export const GET = endpoint(contract, ({ actor, parameters, query }) =>
  readTraces({ actor, team: parameters['team']!, job: parameters['job']!, ...query }),
);
