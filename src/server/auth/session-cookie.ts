/** Puts the session's cookie into an answer, or takes it away. */
import type { AstroCookies } from 'astro';
import type { BegunSession } from './begin-session.ts';
import { sessions } from './sessions.ts';

export function setSessionCookie(cookies: AstroCookies, session: BegunSession): void {
  const { name, value, attributes } = sessions().createSessionCookie(session.secret);
  cookies.set(name, value, attributes);
}

export function clearSessionCookie(cookies: AstroCookies): void {
  const { name, value, attributes } = sessions().createBlankSessionCookie();
  cookies.set(name, value, attributes);
}
