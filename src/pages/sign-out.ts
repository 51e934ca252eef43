/** Ends the session and goes to the front page; a form posts to it. */
import type { APIRoute } from 'astro';
import { paths } from '@/paths.ts';
import { clearSessionCookie } from '@/server/auth/session-cookie.ts';
import { signOut } from '@/server/auth/sign-out.ts';

export const POST: APIRoute = async ({ cookies, locals, redirect }) => {
  await signOut({ actor: locals.actor });
  clearSessionCookie(cookies);
  return redirect(paths.home, 303);
};
