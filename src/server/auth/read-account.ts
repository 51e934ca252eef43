/** The account of the person signed in. */
import { accept, type Result } from '@/domain/refusals.ts';
import type { Actor } from '@/domain/teams/actor.ts';
import { presentPerson, type PresentedPerson } from './present-person.ts';
import { requirePerson } from './require-person.ts';

export async function readAccount(options: { actor: Actor }): Promise<Result<PresentedPerson>> {
  const person = await requirePerson(options.actor);
  return person.ok ? accept(await presentPerson(person.value.user.id)) : person;
}
