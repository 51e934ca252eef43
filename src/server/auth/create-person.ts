/** Makes an account whose address has been proved; wishes for the same address that are still open end. */
import { inWriteTransaction } from '@db/in-write-transaction.ts';
import { User } from '@db/models/people.ts';
import { nowText } from '../clock.ts';
import { newId } from '../ids.ts';
import { withdrawLinks } from './one-time-links.ts';

/** `passwordHash` comes from `hashPassword`, made before the transaction. A taken address throws: look first. */
export async function createPerson(options: {
  email: string;
  name: string;
  passwordHash: string;
  operator?: boolean;
}): Promise<User> {
  const { email, name, passwordHash, operator = false } = options;
  const now = nowText();
  return inWriteTransaction(async () => {
    await withdrawLinks({ purpose: 'verify', email });
    return User.create({
      id: newId('user'),
      email,
      name,
      passwordHash,
      emailVerifiedAt: now,
      operator,
      createdAt: now,
    });
  });
}
