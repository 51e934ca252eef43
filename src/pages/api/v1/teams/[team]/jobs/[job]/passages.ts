import { jobPassages as contract } from '@/contracts/jobs.ts';
import { endpoint } from '@/server/http/endpoint.ts';
import { readPassages } from '@/server/jobs/read-passages.ts';

export const GET = endpoint(contract, ({ actor, parameters, query }) =>
  readPassages({ actor, team: parameters['team']!, job: parameters['job']!, ...query }),
);
