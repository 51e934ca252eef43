/** What every page of our own staff begins with: nobody else learns that it is there. */
import type { AstroGlobal } from 'astro';
import { requireOperator } from '@/server/operate/require-operator.ts';
import { refusedPage } from './open-team-page.ts';

/** The response to answer with instead of the page, or null. */
export async function openOperatorPage(page: AstroGlobal): Promise<Response | null> {
  const operator = requireOperator(page.locals.actor);
  return operator.ok ? null : refusedPage(page, operator.code);
}
