/** Whether the person signed in has a second factor, and how many recovery codes are left. */
import { RecoveryCode, SecondFactor } from '@db/models/second-factor.ts';
import { accept, type Result } from '@/domain/refusals.ts';
import type { Actor } from '@/domain/teams/actor.ts';
import { requirePerson } from './require-person.ts';

export async function readSecondFactor(options: {
  actor: Actor;
}): Promise<Result<{ on: boolean; recoveryCodesLeft: number }>> {
  const person = await requirePerson(options.actor);
  if (!person.ok) return person;
  const userId = person.value.user.id;
  const factor = await SecondFactor.findByPk(userId);
  const recoveryCodesLeft = await RecoveryCode.count({ where: { userId, usedAt: null } });
  return accept({ on: Boolean(factor?.confirmedAt), recoveryCodesLeft });
}
