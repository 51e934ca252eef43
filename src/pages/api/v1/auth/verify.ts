import { accept } from '@/domain/refusals.ts';
import { verifyEmail } from '@/contracts/auth.ts';
import { verifyEmail as serve } from '@/server/auth/verify-email.ts';
import { setSessionCookie } from '@/server/auth/session-cookie.ts';
import { visitorOf } from '@/server/auth/visitor.ts';
import { endpoint } from '@/server/http/endpoint.ts';

export const POST = endpoint(verifyEmail, async ({ body, context }) => {
  const done = await serve({ ...body, visitor: visitorOf(context) });
  if (!done.ok) return done;
  if (done.value.session) setSessionCookie(context.cookies, done.value.session);
  return accept(done.value.answer);
});
