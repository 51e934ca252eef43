/** Opens the one SQLite database of this process through Sequelize, with the PRAGMAs that our guarantees rest on. */
import { AsyncLocalStorage, AsyncResource } from 'node:async_hooks';
import { Sequelize } from 'sequelize';
import sqlite3 from 'sqlite3';
import { defineModels } from './models/index.ts';

/**
 * Sequelize looks up the current transaction here, so that a query inside `inWriteTransaction` joins it without being
 * handed it. A query that missed it would read stale data or fail busy.
 */
const store = new AsyncLocalStorage<Map<string, unknown>>();
const namespace = {
  get: (key: string) => store.getStore()?.get(key),
  set: (key: string, value: unknown) => void store.getStore()?.set(key, value),
  run: (work: (context: unknown) => unknown) => store.run(new Map(store.getStore()), () => work(undefined)),
  bind: <F extends (...args: unknown[]) => unknown>(work: F) => AsyncResource.bind(work),
};
(Sequelize as unknown as { useCLS(namespace: unknown): void }).useCLS(namespace);

// Development reloads modules; the connection outlives them.
const house = globalThis as typeof globalThis & { buretteDatabase?: Sequelize };

const pragmas = [
  'PRAGMA busy_timeout = 10000',
  'PRAGMA journal_mode = WAL',
  'PRAGMA synchronous = FULL',
  'PRAGMA foreign_keys = ON',
  'PRAGMA recursive_triggers = ON',
];

type Connection = sqlite3.Database & { buretteReady?: Promise<void> };

/** `afterConnect` never fires for this dialect, so every connection is prepared the first time it is handed out. */
function prepareConnections(sequelize: Sequelize): void {
  const manager = sequelize.connectionManager as unknown as {
    getConnection(options: unknown): Promise<Connection>;
  };
  const getConnection = manager.getConnection.bind(manager);
  manager.getConnection = async (options) => {
    const connection = await getConnection(options);
    connection.buretteReady ??= new Promise((resolve, reject) => {
      connection.exec(pragmas.join(';'), (error) => (error ? reject(error) : resolve()));
    });
    await connection.buretteReady;
    return connection;
  };
}

/** Opens `file`, an absolute path in a folder that exists. One database per process; opening another is a bug. */
export function openDatabase(file: string): Sequelize {
  if (house.buretteDatabase) throw new Error('A database is already open in this process.');
  const sequelize = new Sequelize({
    dialect: 'sqlite',
    dialectModule: sqlite3,
    storage: file,
    logging: false,
    define: { underscored: false, timestamps: false },
  });
  prepareConnections(sequelize);
  defineModels(sequelize);
  house.buretteDatabase = sequelize;
  return sequelize;
}

// Development reloads modules: fresh model classes are bound to the connection that is already open.
if (house.buretteDatabase) defineModels(house.buretteDatabase);

/** The open database; throws when there is none. */
export function database(): Sequelize {
  if (!house.buretteDatabase) throw new Error('No database is open in this process.');
  return house.buretteDatabase;
}

export async function closeDatabase(): Promise<void> {
  const open = house.buretteDatabase;
  delete house.buretteDatabase;
  await open?.close();
}
