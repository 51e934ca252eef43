/** Changes the name of the person signed in. */
import { inWriteTransaction } from '@db/in-write-transaction.ts';
import { accept, type Result } from '@/domain/refusals.ts';
import type { Actor } from '@/domain/teams/actor.ts';
import { presentPerson, type PresentedPerson } from './present-person.ts';
import { requirePerson } from './require-person.ts';

export async function changeAccount(options: { actor: Actor; name: string }): Promise<Result<PresentedPerson>> {
  return inWriteTransaction(async () => {
    const person = await requirePerson(options.actor);
    if (!person.ok) return person;
    await person.value.user.update({ name: options.name });
    return accept(await presentPerson(person.value.user.id));
  });
}
