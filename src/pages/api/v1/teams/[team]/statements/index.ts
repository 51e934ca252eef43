import * as contracts from '@/contracts/statements.ts';
import { endpoint } from '@/server/http/endpoint.ts';
import { readStatement } from '@/server/statements/read-statement.ts';

export const GET = endpoint(contracts.readStatement, ({ actor, parameters: { team = '' }, query }) =>
  readStatement({ actor, team, ...query }),
);
