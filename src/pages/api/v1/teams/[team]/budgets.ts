import * as contracts from '@/contracts/budgets.ts';
import { readBudgets } from '@/server/budgets/read-budgets.ts';
import { setBudgets } from '@/server/budgets/set-budgets.ts';
import { endpoint } from '@/server/http/endpoint.ts';

export const GET = endpoint(contracts.readBudgets, ({ actor, parameters: { team = '' } }) =>
  readBudgets({ actor, team }),
);

export const PUT = endpoint(contracts.setBudgets, ({ actor, parameters: { team = '' }, body }) =>
  setBudgets({ actor, team, ...body }),
);
