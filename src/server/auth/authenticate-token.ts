/** Reads an Authorization header: the actor of a live API token, or a refusal; never silently nobody. */
import { inWriteTransaction } from '@db/in-write-transaction.ts';
import { ApiToken } from '@db/models/people.ts';
import type { Actor } from '@/domain/teams/actor.ts';
import { accept, refuse, type Result } from '@/domain/refusals.ts';
import { nowText } from '../clock.ts';
import { addressKey, takeAttempt } from '../http/rate-limit.ts';
import { hashSecret } from './secret-hash.ts';

/** The time of last use is kept to the minute: a write for each call would cost more than it tells. */
const lastUseMs = 60_000;

export async function authenticateToken(options: { authorization: string; address: string }): Promise<Result<Actor>> {
  const secret = /^Bearer +([A-Za-z0-9._~+/-]{1,200}=*) *$/i.exec(options.authorization)?.[1];
  const row = secret ? await ApiToken.findOne({ where: { tokenHash: hashSecret(secret) } }) : null;
  const now = nowText();
  if (!row || row.revokedAt || (row.expiresAt !== null && row.expiresAt <= now)) {
    // Only wrong tokens count, so a neighbour who guesses never shuts out a good one.
    const attempt = await takeAttempt('badTokenByAddress', addressKey(options.address));
    return attempt.ok ? refuse('not_signed_in', 'This token is unknown, expired or revoked.') : attempt;
  }
  if (!row.lastUsedAt || row.lastUsedAt < nowText(-lastUseMs))
    await inWriteTransaction(() => ApiToken.update({ lastUsedAt: now }, { where: { id: row.id } }));
  const { userId, teamId, id: tokenId } = row;
  return accept({ kind: 'token', userId, teamId, tokenId, scopes: row.scopes });
}
