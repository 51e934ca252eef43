/** Turns the second factor on by a first code; the recovery codes are in this answer and nowhere else. */
import { randomBytes } from 'node:crypto';
import { inWriteTransaction } from '@db/in-write-transaction.ts';
import { RecoveryCode, SecondFactor } from '@db/models/second-factor.ts';
import { accept, refuse, type Result } from '@/domain/refusals.ts';
import type { Actor } from '@/domain/teams/actor.ts';
import { nowText } from '../clock.ts';
import { takeAttempt } from '../http/rate-limit.ts';
import { newId } from '../ids.ts';
import { queueMail } from '../mail/queue-mail.ts';
import { secondFactorLetter } from './auth-letters.ts';
import { recoveryCodeHash, useCode } from './check-second-factor.ts';
import { toBase32 } from './one-time-code.ts';
import { requirePerson } from './require-person.ts';

const recoveryCodes = 10;

/** 80 bits in four groups: long enough to be kept as a plain hash. */
const newRecoveryCode = (): string =>
  toBase32(randomBytes(10))
    .toLowerCase()
    .replaceAll(/(.{4})(?=.)/g, '$1-');

export async function confirmSecondFactor(options: {
  actor: Actor;
  code: string;
}): Promise<Result<{ recoveryCodes: string[] }>> {
  const person = await requirePerson(options.actor);
  if (!person.ok) return person;
  const { user } = person.value;
  const attempt = await takeAttempt('codeByAccount', user.id);
  if (!attempt.ok) return attempt;
  return inWriteTransaction(async () => {
    const factor = await SecondFactor.findByPk(user.id);
    if (!factor) return refuse('second_factor_off', 'Begin with the secret for your authenticator app.');
    if (factor.confirmedAt) return refuse('second_factor_on', 'The second factor is on already.');
    if (!(await useCode(factor, options.code)))
      return refuse('wrong_code', 'This is not the code of now. Check that the clock of your device is right.');
    await factor.update({ confirmedAt: nowText() });
    await RecoveryCode.destroy({ where: { userId: user.id } });
    const codes = Array.from({ length: recoveryCodes }, newRecoveryCode);
    for (const code of codes) await RecoveryCode.create({ codeHash: recoveryCodeHash(user.id, code), userId: user.id });
    await queueMail({ to: user.email, ...secondFactorLetter('on'), messageKey: `second-factor:${newId('link')}` });
    return accept({ recoveryCodes: codes });
  });
}
