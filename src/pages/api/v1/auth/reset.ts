import { accept } from '@/domain/refusals.ts';
import { resetPassword } from '@/contracts/auth.ts';
import { resetPassword as serve } from '@/server/auth/reset-password.ts';
import { setSessionCookie } from '@/server/auth/session-cookie.ts';
import { visitorOf } from '@/server/auth/visitor.ts';
import { endpoint } from '@/server/http/endpoint.ts';

export const POST = endpoint(resetPassword, async ({ body, context }) => {
  const done = await serve({ ...body, visitor: visitorOf(context) });
  if (!done.ok) return done;
  if (done.value.session) setSessionCookie(context.cookies, done.value.session);
  return accept(done.value.answer);
});
