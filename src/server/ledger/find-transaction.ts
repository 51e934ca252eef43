/** Finds the transaction of an act that may have happened already, so that repeating it changes nothing. */
import { LedgerTransaction } from '@db/models/ledger.ts';
import type { Posting } from '@/domain/ledger/accounts.ts';

/**
 * The transaction with this key, or null. Throws when it exists with other postings or for another team: the same act
 * cannot mean two things.
 */
export async function findTransaction(options: {
  transactionKey: string;
  teamId: string;
  postings: Posting[];
  /** The caller takes whatever amount was posted. */
  anyAmount?: boolean;
}): Promise<LedgerTransaction | null> {
  const { transactionKey, teamId, postings } = options;
  const row = await LedgerTransaction.findOne({ where: { transactionKey } });
  if (!row) return null;
  if (row.teamId !== teamId) throw new Error(`${transactionKey} exists for another team.`);
  const wanted = JSON.stringify(postings);
  if (!options.anyAmount && row.postings !== wanted)
    throw new Error(`${transactionKey} exists with other postings: ${row.postings}, not ${wanted}.`);
  return row;
}
