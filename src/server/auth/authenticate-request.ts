/** Who made a request: the owner of a session cookie or of a bearer token, or nobody. */
import type { AstroCookies } from 'astro';
import type { Actor } from '@/domain/teams/actor.ts';
import { accept, type Result } from '@/domain/refusals.ts';

export interface Identity {
  actor: Actor;
  person: { id: string; name: string; email: string; operator: boolean } | null;
}

export async function authenticateRequest(_options: {
  authorization: string | null;
  cookies: AstroCookies;
}): Promise<Result<Identity>> {
  return accept({ actor: { kind: 'anonymous' }, person: null });
}
