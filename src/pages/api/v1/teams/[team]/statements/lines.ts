import * as contracts from '@/contracts/statements.ts';
import { endpoint } from '@/server/http/endpoint.ts';
import { listStatementLines } from '@/server/statements/list-statement-lines.ts';

export const GET = endpoint(contracts.listStatementLines, ({ actor, parameters: { team = '' }, query }) =>
  listStatementLines({ actor, team, ...query }),
);
