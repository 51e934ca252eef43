/** The canonical text of a ledger transaction, over which its hash is taken. */

/** The fields as they stand in the row. JSON columns are kept as text, so that what is hashed is what is stored. */
export interface CanonicalTransaction {
  sequence: number;
  id: string;
  transactionKey: string;
  kind: string;
  occurredAt: string;
  teamId: string;
  jobId: string | null;
  segmentId: string | null;
  userId: string | null;
  segmentHeldMicrocredits: number | null;
  segmentSpentMicrocredits: number | null;
  postings: string;
  lots: string;
  draws: string;
  memo: string;
  previousHash: string;
}

/** The previous hash of the first transaction. */
export const genesisHash = '0'.repeat(64);

/** A JSON array in a fixed order behind a version tag; UTF-8 of it is hashed with SHA-256. */
export const canonicalText = (row: CanonicalTransaction): string =>
  JSON.stringify([
    'burette-ledger-1',
    row.sequence,
    row.id,
    row.transactionKey,
    row.kind,
    row.occurredAt,
    row.teamId,
    row.jobId,
    row.segmentId,
    row.userId,
    row.segmentHeldMicrocredits,
    row.segmentSpentMicrocredits,
    row.postings,
    row.lots,
    row.draws,
    row.memo,
    row.previousHash,
  ]);
