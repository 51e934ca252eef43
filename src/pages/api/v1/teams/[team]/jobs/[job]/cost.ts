import * as contracts from '@/contracts/job-cost.ts';
import { endpoint } from '@/server/http/endpoint.ts';
import { readJobCost } from '@/server/jobs/read-job-cost.ts';

export const GET = endpoint(contracts.readJobCost, ({ actor, parameters: { team = '', job = '' } }) =>
  readJobCost({ actor, team, job }),
);
