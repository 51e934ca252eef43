/** Quotes, jobs, charge segments, points, batches. */
import type { Migration } from '../migrate.ts';

export const jobs: Migration = {
  name: '0006-jobs',
  statements: [],
};
