/**
 * Checks the second factor of somebody whose password was right: a code of their app, or a recovery code, each once.
 * Guesses are counted by account, which no stranger can use up: only who knows the password gets here.
 */
import { inWriteTransaction } from '@db/in-write-transaction.ts';
import { RecoveryCode, SecondFactor } from '@db/models/second-factor.ts';
import type { User } from '@db/models/people.ts';
import { accept, refuse, type Result } from '@/domain/refusals.ts';
import { nowMs, nowText } from '../clock.ts';
import { forgetAttempts, takeAttempt } from '../http/rate-limit.ts';
import { newId } from '../ids.ts';
import { queueMail } from '../mail/queue-mail.ts';
import { recoveryCodeUsedLetter } from './auth-letters.ts';
import { fromBase32, stepOfCode } from './one-time-code.ts';
import { openSecret } from './sealed-secret.ts';
import { hashSecret } from './secret-hash.ts';

export async function checkSecondFactor(options: { user: User; code: string | undefined }): Promise<Result<null>> {
  const { user, code } = options;
  const factor = await SecondFactor.findByPk(user.id);
  if (!factor?.confirmedAt) return accept(null);
  if (code === undefined)
    return refuse(
      'second_factor_needed',
      'Type the six figures that your authenticator app shows, or a recovery code.',
    );
  const attempt = await takeAttempt('codeByAccount', user.id);
  if (!attempt.ok) return attempt;
  const checked = await inWriteTransaction(async () => {
    await factor.reload();
    return (await useCode(factor, code)) || (await useRecoveryCode(user, code))
      ? accept(null)
      : refuse('wrong_code', 'This code is wrong or was used already. Wait for the next one, or use a recovery code.');
  });
  if (checked.ok) await forgetAttempts('codeByAccount', user.id);
  return checked;
}

/** Marks the code's step as used; false when it is not a code of now. */
export async function useCode(factor: SecondFactor, code: string): Promise<boolean> {
  const secret = fromBase32(openSecret(factor.sealedSecret, factor.userId));
  const step = stepOfCode({ secret, code: code.replaceAll(/\s/g, ''), nowMs: nowMs(), after: factor.lastStep });
  if (step === null) return false;
  await factor.update({ lastStep: step });
  return true;
}

/** Letter case, spaces and dashes do not count. */
export const recoveryCodeHash = (userId: string, code: string): string =>
  hashSecret(`${userId} ${code.toLowerCase().replaceAll(/[\s-]/g, '')}`);

async function useRecoveryCode(user: User, code: string): Promise<boolean> {
  const [used] = await RecoveryCode.update(
    { usedAt: nowText() },
    { where: { codeHash: recoveryCodeHash(user.id, code), userId: user.id, usedAt: null } },
  );
  if (used === 0) return false;
  const left = await RecoveryCode.count({ where: { userId: user.id, usedAt: null } });
  await queueMail({ to: user.email, ...recoveryCodeUsedLetter(left), messageKey: `recovery-code:${newId('link')}` });
  return true;
}
