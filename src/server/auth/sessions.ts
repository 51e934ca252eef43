/** lucia with our adapter and our cookie: `burette_session`, HttpOnly, SameSite=Lax, Secure where the site is https. */
import { Lucia, TimeSpan } from 'lucia';
import { limits } from '@/domain/limits.ts';
import { env } from '../env.ts';
import { sessionAdapter, type SessionAttributes } from './session-adapter.ts';

export interface PersonAttributes {
  name: string;
  email: string;
  operator: boolean;
}

type Sessions = Lucia<SessionAttributes, PersonAttributes>;

declare module 'lucia' {
  interface Register {
    Lucia: Sessions;
    DatabaseSessionAttributes: SessionAttributes;
    DatabaseUserAttributes: PersonAttributes;
  }
}

const made = new Map<boolean, Sessions>();

export function sessions(): Sessions {
  const secure = env().PUBLIC_URL.startsWith('https:');
  let lucia = made.get(secure);
  if (!lucia) {
    lucia = new Lucia<SessionAttributes, PersonAttributes>(sessionAdapter, {
      sessionExpiresIn: new TimeSpan(limits.sessionIdleDays, 'd'),
      sessionCookie: { name: 'burette_session', attributes: { secure, sameSite: 'lax', path: '/' } },
      getSessionAttributes: (attributes) => attributes,
      getUserAttributes: (attributes) => attributes,
    });
    made.set(secure, lucia);
  }
  return lucia;
}
