/** Defines every model on the connection. A model class is usable once `openDatabase` has run. */
import type { Sequelize } from 'sequelize';
import { definePeople } from './people.ts';

export function defineModels(sequelize: Sequelize): void {
  definePeople(sequelize);
}
