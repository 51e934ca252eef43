/** Idempotency keys: the same key and body give the first answer again; another body gives 409. Kept 24 hours. */
import { createHash } from 'node:crypto';
import { inWriteTransaction } from '@db/in-write-transaction.ts';
import { IdempotencyKey } from '@db/models/people.ts';
import { refuse, type Result } from '@/domain/refusals.ts';
import { nowText } from '../clock.ts';

export interface Idempotency {
  /** principal | team | route */
  scope: string;
  key: string;
  /** SHA-256 of the raw body. */
  bodyHash: string;
}

export const hashBody = (body: string): string => createHash('sha256').update(body).digest('hex');

const dayMs = 24 * 60 * 60 * 1000;

/** The remembered answer, a refusal when the key served another body, or null when the key is new. */
export async function recallAnswer<T>(idempotency: Idempotency | undefined): Promise<Result<T> | null> {
  if (!idempotency) return null;
  const { scope, key, bodyHash } = idempotency;
  const row = await IdempotencyKey.findOne({ where: { scope, idempotencyKey: key } });
  if (!row) return null;
  if (row.createdAt < nowText(-dayMs)) {
    await inWriteTransaction(() => row.destroy());
    return null;
  }
  if (row.bodyHash !== bodyHash)
    return refuse('idempotency_key_reused', 'This Idempotency-Key was used with another body. Use a new key.');
  return row.answer as Result<T>;
}

/**
 * Runs `commit` in a write transaction that also remembers its answer. Refusals are not remembered: nothing happened,
 * so the same key may try again. Answers must not hold secrets.
 */
export async function answerOnce<T>(
  idempotency: Idempotency | undefined,
  commit: () => Promise<Result<T>>,
): Promise<Result<T>> {
  return inWriteTransaction(async () => {
    const recalled = await recallAnswer<T>(idempotency);
    if (recalled) return recalled;
    const answer = await commit();
    if (idempotency && answer.ok)
      await IdempotencyKey.create({
        scope: idempotency.scope,
        idempotencyKey: idempotency.key,
        bodyHash: idempotency.bodyHash,
        answer,
        createdAt: nowText(),
      });
    return answer;
  });
}
