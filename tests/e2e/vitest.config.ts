import { defineConfig } from 'vitest/config';
import { fileURLToPath } from 'node:url';

const folder = (name: string) => fileURLToPath(new URL(`../../${name}`, import.meta.url));

/** Journeys run one after another against the built server; each file starts its own, in an empty data folder. */
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
    include: ['tests/e2e/**/*.test.ts'],
    pool: 'forks',
    maxWorkers: 1,
    fileParallelism: false,
    testTimeout: 400_000,
    hookTimeout: 120_000,
  },
});
