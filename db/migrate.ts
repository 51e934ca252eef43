/** Brings the open database to the newest schema; forward only. Migrations are listed, not globbed, so bundling keeps them. */
import type { QueryInterface } from 'sequelize';
import { SequelizeStorage, Umzug } from 'umzug';
import { database } from './connection.ts';
import { migrations } from './migrations/index.ts';

export interface Migration {
  /** `0001-people`: the number orders, the words tell. Never renamed once released. */
  name: string;
  /** SQL statements, run in order in one transaction. Triggers hold semicolons, so statements are separate strings. */
  statements: string[];
}

/** Applies what is missing and returns the names applied. */
export async function migrate(): Promise<string[]> {
  const sequelize = database();
  const umzug = new Umzug<QueryInterface>({
    migrations: migrations.map(({ name, statements }) => ({
      name,
      up: async () => {
        await sequelize.transaction(async () => {
          for (const statement of statements) await sequelize.query(statement);
        });
      },
    })),
    context: sequelize.getQueryInterface(),
    storage: new SequelizeStorage({ sequelize, modelName: 'migrations' }),
    logger: undefined,
  });
  return (await umzug.up()).map(({ name }) => name);
}
