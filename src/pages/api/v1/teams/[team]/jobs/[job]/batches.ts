import { jobBatches as contract } from '@/contracts/jobs.ts';
import { endpoint } from '@/server/http/endpoint.ts';
import { listBatches } from '@/server/jobs/list-batches.ts';

export const GET = endpoint(contract, ({ actor, parameters, query }) =>
  listBatches({ actor, team: parameters['team']!, job: parameters['job']!, ...query }),
);
