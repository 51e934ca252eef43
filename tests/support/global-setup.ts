/** Once per vitest run: bundles the worker where tests find it and makes one migrated database that tests copy. */
import { mkdir, rename, rm } from 'node:fs/promises';
import path from 'node:path';
import * as esbuild from 'esbuild';
import { closeDatabase, openDatabase } from '@db/connection.ts';
import { migrate } from '@db/migrate.ts';
import { workerBuildOptions, workerOutputs } from '../../astro.integration.mjs';
import { migratedTemplate } from './migrated-template.ts';

export default async function setup(): Promise<void> {
  await esbuild.build(workerBuildOptions(workerOutputs.development));
  await mkdir(path.dirname(migratedTemplate), { recursive: true });
  // Made aside and renamed: another run may be copying the present one.
  const making = `${migratedTemplate}.${process.pid}`;
  for (const suffix of ['', '-wal', '-shm']) await rm(making + suffix, { force: true });
  openDatabase(making);
  await migrate();
  await closeDatabase();
  await rename(making, migratedTemplate);
}
