import { signOut } from '@/contracts/auth.ts';
import { signOut as serve } from '@/server/auth/sign-out.ts';
import { clearSessionCookie } from '@/server/auth/session-cookie.ts';
import { endpoint } from '@/server/http/endpoint.ts';

export const POST = endpoint(signOut, async ({ actor, context }) => {
  const done = await serve({ actor });
  clearSessionCookie(context.cookies);
  return done;
});
