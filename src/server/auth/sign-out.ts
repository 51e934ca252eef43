/** Ends the session that a request came with. */
import { inWriteTransaction } from '@db/in-write-transaction.ts';
import { Session } from '@db/models/people.ts';
import type { Actor } from '@/domain/teams/actor.ts';
import { accept, type Result } from '@/domain/refusals.ts';

export async function signOut(options: { actor: Actor }): Promise<Result<null>> {
  const { actor } = options;
  if (actor.kind === 'user') await inWriteTransaction(() => Session.destroy({ where: { id: actor.sessionId } }));
  return accept(null);
}
