/** Brings the house up before the first request and down after the last: lock, database, migrations, running parts. */
import { mkdir } from 'node:fs/promises';
import path from 'node:path';
import lockfile from 'proper-lockfile';
import { closeDatabase, openDatabase } from '@db/connection.ts';
import { writesFinished } from '@db/in-write-transaction.ts';
import { migrate } from '@db/migrate.ts';
import { env } from './env.ts';
import { log } from './log.ts';
import { parts } from './parts.ts';

const house = globalThis as typeof globalThis & { buretteBoot?: Promise<() => Promise<void>> };

/** Boots once per process, however often it is asked; resolves to the function that shuts everything down. */
export const bootServer = (): Promise<() => Promise<void>> => (house.buretteBoot ??= boot());

async function boot(): Promise<() => Promise<void>> {
  const folder = env().BURETTE_DATA_DIR;
  await mkdir(folder, { recursive: true });
  const unlock = await lockFolder(folder);
  openDatabase(path.join(folder, 'burette.sqlite'));
  const applied = await migrate();
  if (applied.length > 0) log().info({ applied }, 'database migrated');
  const stops: (() => Promise<void>)[] = [];
  for (const part of parts) {
    stops.unshift(await part.start());
    log().debug({ part: part.name }, 'part started');
  }
  return async () => {
    for (const stop of stops) await stop();
    await writesFinished();
    await closeDatabase();
    await unlock();
    delete house.buretteBoot;
  };
}

/** One process owns the data folder. A lock left by a killed process is taken over once its heartbeat is old. */
async function lockFolder(folder: string): Promise<() => Promise<void>> {
  return lockfile.lock(folder, {
    lockfilePath: path.join(folder, 'lock'),
    stale: 5_000,
    update: 1_000,
    retries: { retries: 14, minTimeout: 500, maxTimeout: 500 },
  });
}
