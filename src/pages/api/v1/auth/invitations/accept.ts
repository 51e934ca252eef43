import { accept } from '@/domain/refusals.ts';
import { acceptInvitation } from '@/contracts/auth.ts';
import { acceptInvitation as serve } from '@/server/teams/accept-invitation.ts';
import { setSessionCookie } from '@/server/auth/session-cookie.ts';
import { visitorOf } from '@/server/auth/visitor.ts';
import { endpoint } from '@/server/http/endpoint.ts';

export const POST = endpoint(acceptInvitation, async ({ actor, body, context }) => {
  const done = await serve({ actor, ...body, visitor: visitorOf(context) });
  if (!done.ok) return done;
  if (done.value.session) setSessionCookie(context.cookies, done.value.session);
  return accept(done.value.answer);
});
