/** Keeps passwords as argon2id, with the memory and time that OWASP's cheat sheet asks for (from memory). */
import { hash, verify } from '@node-rs/argon2';

/** argon2id is the library's default algorithm; memory in KiB. */
const cost = { memoryCost: 19_456, timeCost: 2, parallelism: 1 };

export const hashPassword = (password: string): Promise<string> => hash(password.normalize('NFKC'), cost);

/** Of a password that nobody has: comparing with it takes as long as comparing with a real one. */
let nobodysHash: Promise<string> | undefined;

/** Without a hash (no such person, no password yet) the same work is done and the answer is no. */
export async function passwordMatches(password: string, passwordHash: string | null | undefined): Promise<boolean> {
  nobodysHash ??= hashPassword('nobody has this password');
  const matches = await verify(passwordHash ?? (await nobodysHash), password.normalize('NFKC'));
  return matches && typeof passwordHash === 'string';
}
