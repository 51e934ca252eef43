/** A fresh, migrated database and data folder for one test file. Call at the top of the file. */
import { copyFile, mkdtemp, rm } from 'node:fs/promises';
import { tmpdir } from 'node:os';
import path from 'node:path';
import { afterAll, beforeAll } from 'vitest';
import { closeDatabase, openDatabase } from '@db/connection.ts';
import { readEnv, setEnv } from '@/server/env.ts';
import { migratedTemplate } from './migrated-template.ts';

/** Opens the copy before all tests of the file and removes it after them. `more` adds environment variables. */
export function useTestDatabase(more: Record<string, string> = {}): { folder: () => string } {
  let folder = '';
  beforeAll(async () => {
    folder = await mkdtemp(path.join(tmpdir(), 'burette-test-'));
    setEnv(
      readEnv({
        NODE_ENV: 'test',
        LOG_LEVEL: 'fatal',
        BURETTE_DATA_DIR: folder,
        PUBLIC_URL: 'http://burette.test',
        ...more,
      }),
    );
    const file = path.join(folder, 'burette.sqlite');
    await copyFile(migratedTemplate, file);
    openDatabase(file);
  });
  afterAll(async () => {
    await closeDatabase();
    await rm(folder, { recursive: true, force: true });
  });
  return { folder: () => folder };
}
