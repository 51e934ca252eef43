/** Ends one of one's own sessions, named by its stored id. */
import { inWriteTransaction } from '@db/in-write-transaction.ts';
import { Session } from '@db/models/people.ts';
import { accept, refuse, type Result } from '@/domain/refusals.ts';
import type { Actor } from '@/domain/teams/actor.ts';
import { requirePerson } from './require-person.ts';

export async function endSession(options: { actor: Actor; session: string }): Promise<Result<null>> {
  const person = await requirePerson(options.actor);
  if (!person.ok) return person;
  const where = { id: options.session, userId: person.value.user.id };
  const ended = await inWriteTransaction(() => Session.destroy({ where }));
  return ended > 0 ? accept(null) : refuse('not_found', 'There is no such session; it may have ended already.');
}
