/** Project codes and the mail outbox. */
import type { Migration } from '../migrate.ts';

export const teams: Migration = {
  name: '0002-teams',
  statements: [],
};
