import { defineConfig } from 'vitest/config';
import { fileURLToPath } from 'node:url';

const folder = (name: string) => fileURLToPath(new URL(`../../${name}`, import.meta.url));

/** Faults are done to the built server, one file after the other. */
export default defineConfig({
  root: folder(''),
  resolve: {
    alias: {
      '@/': folder('src/'),
      '@db/': folder('db/'),
      '@workers/': folder('workers/'),
      '@tests/': folder('tests/'),
    },
  },
  test: {
    include: ['tests/fault/**/*.test.ts'],
    pool: 'forks',
    maxWorkers: 1,
    fileParallelism: false,
    testTimeout: 900_000,
    hookTimeout: 120_000,
  },
});
