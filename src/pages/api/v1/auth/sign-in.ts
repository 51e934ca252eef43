import { accept } from '@/domain/refusals.ts';
import { signIn } from '@/contracts/auth.ts';
import { signIn as serve } from '@/server/auth/sign-in.ts';
import { setSessionCookie } from '@/server/auth/session-cookie.ts';
import { visitorOf } from '@/server/auth/visitor.ts';
import { endpoint } from '@/server/http/endpoint.ts';

export const POST = endpoint(signIn, async ({ body, context }) => {
  const done = await serve({ ...body, visitor: visitorOf(context) });
  if (!done.ok) return done;
  if (done.value.session) setSessionCookie(context.cookies, done.value.session);
  return accept(done.value.answer);
});
