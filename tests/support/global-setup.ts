/** Once per vitest run: bundles the worker where tests find it and makes one migrated database that tests copy. */
import { mkdir, rm } from 'node:fs/promises';
import path from 'node:path';
import * as esbuild from 'esbuild';
import { closeDatabase, openDatabase } from '@db/connection.ts';
import { migrate } from '@db/migrate.ts';
import { workerBuildOptions, workerOutputs } from '../../astro.integration.mjs';
import { migratedTemplate } from './migrated-template.ts';

export default async function setup(): Promise<void> {
  await esbuild.build(workerBuildOptions(workerOutputs.development));
  await mkdir(path.dirname(migratedTemplate), { recursive: true });
  for (const suffix of ['', '-wal', '-shm']) await rm(migratedTemplate + suffix, { force: true });
  openDatabase(migratedTemplate);
  await migrate();
  await closeDatabase();
}
