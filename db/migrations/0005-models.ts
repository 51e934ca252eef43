/** Models and their immutable versions. */
import type { Migration } from '../migrate.ts';

export const models: Migration = {
  name: '0005-models',
  statements: [],
};
