/** Turns the second factor off: asks for the password and a code, so that a session alone is not enough. */
import { inWriteTransaction } from '@db/in-write-transaction.ts';
import { RecoveryCode, SecondFactor } from '@db/models/second-factor.ts';
import { accept, refuse, type Result } from '@/domain/refusals.ts';
import type { Actor } from '@/domain/teams/actor.ts';
import { newId } from '../ids.ts';
import { queueMail } from '../mail/queue-mail.ts';
import { secondFactorLetter } from './auth-letters.ts';
import { checkPresentPassword } from './check-present-password.ts';
import { checkSecondFactor } from './check-second-factor.ts';
import { requirePerson } from './require-person.ts';
import type { Visitor } from './visitor.ts';

export async function removeSecondFactor(options: {
  actor: Actor;
  presentPassword: string;
  code: string;
  visitor: Visitor;
}): Promise<Result<null>> {
  const person = await requirePerson(options.actor);
  if (!person.ok) return person;
  const { user } = person.value;
  const proven = await checkPresentPassword({ ...options, user });
  if (!proven.ok) return proven;
  if (!(await SecondFactor.findByPk(user.id))?.confirmedAt)
    return refuse('second_factor_off', 'There is no second factor to turn off.');
  const checked = await checkSecondFactor({ user, code: options.code });
  if (!checked.ok) return checked;
  return inWriteTransaction(async () => {
    await SecondFactor.destroy({ where: { userId: user.id } });
    await RecoveryCode.destroy({ where: { userId: user.id } });
    await queueMail({ to: user.email, ...secondFactorLetter('off'), messageKey: `second-factor:${newId('link')}` });
    return accept(null);
  });
}
