/** For acts on one's own account: a person with a session; a token is not enough. */
import { User } from '@db/models/people.ts';
import { accept, refuse, type Result } from '@/domain/refusals.ts';
import type { Actor } from '@/domain/teams/actor.ts';

export async function requirePerson(actor: Actor): Promise<Result<{ user: User; sessionId: string }>> {
  if (actor.kind === 'anonymous') return refuse('not_signed_in', 'Sign in first.');
  if (actor.kind !== 'user') return refuse('forbidden', 'This needs a person who is signed in; a token cannot do it.');
  const user = await User.findByPk(actor.userId);
  return user ? accept({ user, sessionId: actor.sessionId }) : refuse('not_signed_in', 'Sign in first.');
}
