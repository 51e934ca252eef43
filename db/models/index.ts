/** Defines every model on the connection. A model class is usable once `openDatabase` has run. */
import type { Sequelize } from 'sequelize';
import { defineBilling } from './billing.ts';
import { defineCards } from './cards.ts';
import { defineFinance } from './finance.ts';
import { defineJobs } from './jobs.ts';
import { defineLedger } from './ledger.ts';
import { defineNetworkModels } from './models.ts';
import { definePeople } from './people.ts';
import { defineSecondFactor } from './second-factor.ts';
import { defineTeams } from './teams.ts';
import { defineWebhooks } from './webhooks.ts';

export function defineModels(sequelize: Sequelize): void {
  definePeople(sequelize);
  defineSecondFactor(sequelize);
  defineTeams(sequelize);
  defineLedger(sequelize);
  defineBilling(sequelize);
  defineCards(sequelize);
  defineNetworkModels(sequelize);
  defineJobs(sequelize);
  defineFinance(sequelize);
  defineWebhooks(sequelize);
}
