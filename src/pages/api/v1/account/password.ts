import { changePassword } from '@/contracts/auth.ts';
import { changePassword as serve } from '@/server/auth/change-password.ts';
import { setSessionCookie } from '@/server/auth/session-cookie.ts';
import { visitorOf } from '@/server/auth/visitor.ts';
import { endpoint } from '@/server/http/endpoint.ts';

export const POST = endpoint(changePassword, async ({ actor, body, context }) => {
  const done = await serve({ actor, ...body, visitor: visitorOf(context) });
  if (done.ok) setSessionCookie(context.cookies, done.value.session);
  return done;
});
