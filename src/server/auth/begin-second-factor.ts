/** Makes the secret of a second factor, shown this once; nothing is asked for at sign-in before a first code confirms it. */
import { randomBytes } from 'node:crypto';
import { inWriteTransaction } from '@db/in-write-transaction.ts';
import { SecondFactor } from '@db/models/second-factor.ts';
import { accept, refuse, type Result } from '@/domain/refusals.ts';
import type { Actor } from '@/domain/teams/actor.ts';
import { nowText } from '../clock.ts';
import { checkPresentPassword } from './check-present-password.ts';
import { toBase32 } from './one-time-code.ts';
import { requirePerson } from './require-person.ts';
import { sealSecret } from './sealed-secret.ts';
import type { Visitor } from './visitor.ts';

/** 160 bits, the length that RFC 4226 recommends. */
const secretBytes = 20;

export async function beginSecondFactor(options: {
  actor: Actor;
  presentPassword: string;
  visitor: Visitor;
}): Promise<Result<{ secret: string; uri: string }>> {
  const person = await requirePerson(options.actor);
  if (!person.ok) return person;
  const { user } = person.value;
  const proven = await checkPresentPassword({ ...options, user });
  if (!proven.ok) return proven;
  return inWriteTransaction(async () => {
    if ((await SecondFactor.findByPk(user.id))?.confirmedAt)
      return refuse('second_factor_on', 'A second factor is on already. Turn it off first to move to another device.');
    const secret = toBase32(randomBytes(secretBytes));
    await SecondFactor.upsert({
      userId: user.id,
      sealedSecret: sealSecret(secret, user.id),
      createdAt: nowText(),
      confirmedAt: null,
      lastStep: 0,
    });
    const uri = `otpauth://totp/Burette:${encodeURIComponent(user.email)}?secret=${secret}&issuer=Burette`;
    return accept({ secret, uri });
  });
}
