/** Rate limits in memory (one process owns the data folder, so one process counts). */
import { isIPv6 } from 'node:net';
import { RateLimiterMemory, RateLimiterRes } from 'rate-limiter-flexible';
import { accept, refuse, type Result } from '@/domain/refusals.ts';

/** Attempts within a window that begins with the first one. An address is an IPv4 address or an IPv6 /64. */
const windows = {
  /** Wrong passwords. The account-wide one spares addresses where the person is already at home (sign-in.ts). */
  signInByAddress: { attempts: 40, seconds: 15 * 60 },
  signInByAddressAndAccount: { attempts: 10, seconds: 15 * 60 },
  signInByAccount: { attempts: 30, seconds: 60 * 60 },
  /** Codes of a second factor, asked for once the password was right: of 10⁶ codes three are valid at a time. */
  codeByAccount: { attempts: 10, seconds: 15 * 60 },
  /** Acts that send a mail to somebody who has not proved to be the asker. */
  mailByAddress: { attempts: 40, seconds: 60 * 60 },
  signUpMailByRecipient: { attempts: 5, seconds: 60 * 60 },
  /** Whoever uses these up has put as many working links into the person's mailbox. */
  resetMailByRecipient: { attempts: 5, seconds: 60 * 60 },
  invitationMailByRecipient: { attempts: 5, seconds: 60 * 60 },
  invitationMailByTeam: { attempts: 100, seconds: 60 * 60 },
  /** Guessing one-time links, the password behind one, and API tokens. */
  linkByAddress: { attempts: 60, seconds: 15 * 60 },
  verifyByLink: { attempts: 10, seconds: 60 * 60 },
  badTokenByAddress: { attempts: 60, seconds: 5 * 60 },
  /** Any call of the API. */
  callsByPrincipal: { attempts: 1_500, seconds: 60 },
} as const;
export type LimitName = keyof typeof windows;

const house = globalThis as typeof globalThis & { buretteRateLimits?: Map<LimitName, RateLimiterMemory> };

function limiter(name: LimitName): RateLimiterMemory {
  const limiters = (house.buretteRateLimits ??= new Map());
  let found = limiters.get(name);
  if (!found) {
    const { attempts, seconds } = windows[name];
    found = new RateLimiterMemory({ keyPrefix: name, points: attempts, duration: seconds });
    limiters.set(name, found);
  }
  return found;
}

/** Counts one attempt; `rate_limited` when there are none left. Count first and give back: parallel attempts count too. */
export async function takeAttempt(name: LimitName, key: string): Promise<Result<null>> {
  try {
    await limiter(name).consume(key);
    return accept(null);
  } catch (error) {
    if (!(error instanceof RateLimiterRes)) throw error;
    const seconds = Math.max(1, Math.ceil(error.msBeforeNext / 1000));
    return refuse('rate_limited', `Too many attempts. Try again in ${inWords(seconds)}.`, {
      retryAfterSeconds: seconds,
    });
  }
}

/** For an attempt that turned out to be honest. */
export async function giveBackAttempt(name: LimitName, key: string): Promise<void> {
  await limiter(name).reward(key);
}

/** Forgets everything counted under a key. */
export async function forgetAttempts(name: LimitName, key: string): Promise<void> {
  await limiter(name).delete(key);
}

/** Tests only. */
export const resetRateLimits = (): void => void house.buretteRateLimits?.clear();

/** What an address counts as: whoever has one IPv6 address has its whole /64. */
export function addressKey(address: string): string {
  const plain = address.replace(/^::ffff:(?=\d+\.)/i, '').replace(/%.*$/, '');
  if (!isIPv6(plain)) return plain;
  const [head = '', tail] = plain.split('::');
  const before = head === '' ? [] : head.split(':');
  const after = tail === undefined || tail === '' ? [] : tail.split(':');
  const missing = tail === undefined ? 0 : 8 - before.length - after.length;
  const groups = [...before, ...Array.from({ length: missing }, () => '0'), ...after];
  return `${groups
    .slice(0, 4)
    .map((group) => group.toLowerCase().replace(/^0+(?=.)/, ''))
    .join(':')}::/64`;
}

const inWords = (seconds: number): string =>
  seconds < 90 ? `${seconds} seconds` : `${Math.ceil(seconds / 60)} minutes`;
