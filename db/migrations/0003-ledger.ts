/** Ledger transactions, postings, lots, draws and the triggers that guard them; price books. */
import type { Migration } from '../migrate.ts';

export const ledger: Migration = {
  name: '0003-ledger',
  statements: [],
};
