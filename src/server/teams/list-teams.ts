/** Teams of the person signed in. */
import { accept, type Result } from '@/domain/refusals.ts';
import type { Actor } from '@/domain/teams/actor.ts';
import { presentPerson, type PresentedPerson } from '../auth/present-person.ts';
import { requirePerson } from '../auth/require-person.ts';

export async function listTeams(options: {
  actor: Actor;
}): Promise<Result<{ teams: PresentedPerson['teams']; nextCursor: null }>> {
  const person = await requirePerson(options.actor);
  if (!person.ok) return person;
  const { teams } = await presentPerson(person.value.user.id);
  return accept({ teams, nextCursor: null });
}
