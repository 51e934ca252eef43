/** Lets operators and our own processes through; for everybody else there is nothing here. */
import { accept, refuse, type Result } from '@/domain/refusals.ts';
import type { Actor } from '@/domain/teams/actor.ts';

/** Answers the operator's user id; null for our own processes. */
export function requireOperator(actor: Actor): Result<{ userId: string | null }> {
  if (actor.kind === 'anonymous') return refuse('not_signed_in', 'Sign in.');
  if (actor.kind === 'system') return accept({ userId: null });
  return actor.kind === 'user' && actor.operator
    ? accept({ userId: actor.userId })
    : refuse('not_found', 'There is nothing here.');
}
