/** Who made a request: the owner of a bearer token or of a session cookie, or nobody. */
import type { AstroCookies } from 'astro';
import type { Actor } from '@/domain/teams/actor.ts';
import { accept, type Result } from '@/domain/refusals.ts';
import { authenticateToken } from './authenticate-token.ts';
import { clearSessionCookie, setSessionCookie } from './session-cookie.ts';
import { hashSecret } from './secret-hash.ts';
import { sessions } from './sessions.ts';

export interface Identity {
  actor: Actor;
  /** The person signed in by cookie; null for a token, so that pages never open to one. */
  person: { id: string; name: string; email: string; operator: boolean } | null;
}

const nobody: Identity = { actor: { kind: 'anonymous' }, person: null };

/** With an Authorization header the cookie is not even read, and a header that proves nothing is refused. */
export async function authenticateRequest(options: {
  authorization: string | null;
  cookies: AstroCookies;
  address: string;
}): Promise<Result<Identity>> {
  const { authorization, cookies, address } = options;
  if (authorization !== null) {
    const actor = await authenticateToken({ authorization, address });
    return actor.ok ? accept({ actor: actor.value, person: null }) : actor;
  }
  const secret = cookies.get(sessions().sessionCookieName)?.value;
  if (!secret) return accept(nobody);
  const { session, user } = await sessions().validateSession(secret);
  if (!session) {
    clearSessionCookie(cookies);
    return accept(nobody);
  }
  if (session.fresh) setSessionCookie(cookies, { secret });
  const { id, name, email } = user;
  const operator = Boolean(user.operator);
  return accept({
    actor: { kind: 'user', userId: id, operator, sessionId: hashSecret(secret) },
    person: { id, name, email, operator },
  });
}
