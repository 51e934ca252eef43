import { jobCorrelations as contract } from '@/contracts/jobs.ts';
import { endpoint } from '@/server/http/endpoint.ts';
import { readCorrelations } from '@/server/jobs/read-correlations.ts';

export const GET = endpoint(contract, ({ actor, parameters, query }) =>
  readCorrelations({ actor, team: parameters['team']!, job: parameters['job']!, ...query }),
);
