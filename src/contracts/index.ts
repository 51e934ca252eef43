/** Every contract of the API. The OpenAPI document and the walk over the routes are made from this list. */
import { archiveContracts } from './archives.ts';
import { authContracts } from './auth.ts';
import { billingContracts } from './billing.ts';
import { budgetContracts } from './budgets.ts';
import type { Contract } from './contract.ts';
import { readJobCost } from './job-cost.ts';
import { readSweep } from './job-sweep.ts';
import { jobContracts } from './jobs.ts';
import { ledgerContracts } from './ledger.ts';
import { networkContracts } from './network.ts';
import { operateContracts } from './operate.ts';
import { secondFactorContracts } from './second-factor.ts';
import { statementContracts } from './statements.ts';
import { systemContracts } from './system.ts';
import { teamContracts } from './teams.ts';
import { webhookContracts } from './webhooks.ts';

export const contracts: Contract[] = [
  ...systemContracts,
  ...authContracts,
  ...secondFactorContracts,
  ...teamContracts,
  ...webhookContracts,
  ...networkContracts,
  ...jobContracts,
  readJobCost,
  readSweep,
  ...archiveContracts,
  ...ledgerContracts,
  ...billingContracts,
  ...statementContracts,
  ...budgetContracts,
  ...operateContracts,
];
