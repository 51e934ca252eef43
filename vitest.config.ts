/// <reference types="vitest/config" />
import { getViteConfig } from 'astro/config';

export default getViteConfig({
  test: {
    pool: 'forks',
    maxWorkers: 2,
    globalSetup: ['tests/support/global-setup.ts'],
    setupFiles: ['tests/support/fail-on-console.ts'],
    testTimeout: 30_000,
    hookTimeout: 60_000,
    include: ['src/**/*.test.{ts,tsx}', 'db/**/*.test.ts', 'workers/**/*.test.ts', 'tests/**/*.test.{ts,tsx}'],
    exclude: ['node_modules', 'dist', 'tests/e2e/**', 'tests/fault/**'],
  },
});
