/** Every migration, oldest first. */
import type { Migration } from '../migrate.ts';
import { people } from './0001-people.ts';
import { teams } from './0002-teams.ts';
import { ledger } from './0003-ledger.ts';
import { billing } from './0004-billing.ts';
import { models } from './0005-models.ts';
import { jobs } from './0006-jobs.ts';
import { finance } from './0007-finance.ts';
import { creditReturns } from './0008-credit-returns.ts';
import { cardsAndDisputes } from './0009-cards-and-disputes.ts';
import { pilotMeans } from './0010-pilot-means.ts';
import { webhooks } from './0020-webhooks.ts';
import { secondFactor } from './0021-second-factor.ts';
import { tokenCaps } from './0022-token-caps.ts';

export const migrations: Migration[] = [
  people,
  teams,
  ledger,
  billing,
  models,
  jobs,
  finance,
  creditReturns,
  cardsAndDisputes,
  pilotMeans,
  webhooks,
  secondFactor,
  tokenCaps,
];
