import * as contracts from '@/contracts/statements.ts';
import { endpoint } from '@/server/http/endpoint.ts';
import { readYearSummary } from '@/server/statements/read-year-summary.ts';

export const GET = endpoint(contracts.readYearSummary, ({ actor, parameters: { team = '' }, query }) =>
  readYearSummary({ actor, team, ...query }),
);
