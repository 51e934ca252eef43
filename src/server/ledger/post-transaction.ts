/** Appends one transaction to the ledger: the only writer of it. Decisions and refusals happen before, in the verbs. */
import { createHash } from 'node:crypto';
import { afterCommit, inWriteTransaction } from '@db/in-write-transaction.ts';
import { LedgerTransaction } from '@db/models/ledger.ts';
import type { Posting, TransactionKind } from '@/domain/ledger/accounts.ts';
import { canonicalText, genesisHash, type CanonicalTransaction } from '@/domain/ledger/canonical-transaction.ts';
import type { LotDraw, LotIssue } from '@/domain/ledger/lots.ts';
import { nowText } from '../clock.ts';
import { wakeAutomaticTopUps } from '../billing/wake-automatic-top-ups.ts';
import { newId } from '../ids.ts';

export interface Segment {
  jobId: string;
  segmentId: string;
  /** Running totals after this transaction. */
  heldMicrocredits: number;
  spentMicrocredits: number;
}

export interface NewTransaction {
  /** Says what act this is, such as `settle:<settlementId>`; a second transaction with it is refused as a bug. */
  transactionKey: string;
  kind: TransactionKind;
  teamId: string;
  userId?: string | null;
  segment?: Segment;
  postings: Posting[];
  lots?: LotIssue[];
  draws?: LotDraw[];
  /** Facts kept beside the amounts; never money. */
  memo?: Record<string, unknown>;
}

/** SHA-256 of the canonical bytes, in lower-case hexadecimal. */
export const hashTransaction = (row: CanonicalTransaction): string =>
  createHash('sha256').update(canonicalText(row), 'utf8').digest('hex');

export async function postTransaction(transaction: NewTransaction): Promise<LedgerTransaction> {
  return inWriteTransaction(async () => {
    const head = await LedgerTransaction.findOne({ order: [['sequence', 'DESC']], attributes: ['sequence', 'hash'] });
    const { segment } = transaction;
    const row: CanonicalTransaction & { kind: TransactionKind } = {
      sequence: (head?.sequence ?? 0) + 1,
      id: newId('transaction'),
      transactionKey: transaction.transactionKey,
      kind: transaction.kind,
      occurredAt: nowText(),
      teamId: transaction.teamId,
      jobId: segment?.jobId ?? null,
      segmentId: segment?.segmentId ?? null,
      userId: transaction.userId ?? null,
      segmentHeldMicrocredits: segment?.heldMicrocredits ?? null,
      segmentSpentMicrocredits: segment?.spentMicrocredits ?? null,
      postings: JSON.stringify(transaction.postings),
      lots: JSON.stringify(transaction.lots ?? []),
      draws: JSON.stringify(transaction.draws ?? []),
      memo: JSON.stringify(transaction.memo ?? {}),
      previousHash: head?.hash ?? genesisHash,
    };
    afterCommit(wakeAutomaticTopUps);
    return LedgerTransaction.create({ ...row, hash: hashTransaction(row) });
  });
}
