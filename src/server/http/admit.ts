/**
 * Turns strangers away before their body is read. The service behind the endpoint authorises again and is the one
 * that counts; this only keeps 10 MB of somebody else's text out of our parsers.
 */
import type { Access } from '@/contracts/contract.ts';
import type { Actor } from '@/domain/teams/actor.ts';
import { accept, refuse, type Result } from '@/domain/refusals.ts';
import { authorise } from '../teams/authorise.ts';

export async function admit(options: {
  access: Access;
  actor: Actor;
  team: string | undefined;
}): Promise<Result<unknown>> {
  const { access, actor } = options;
  if (access.kind === 'public') return accept(null);
  if (actor.kind === 'anonymous') return refuse('not_signed_in', 'Sign in, or send an API token.');
  if (access.kind === 'team') return authorise({ actor, team: options.team ?? '', permission: access.permission });
  if (access.kind === 'operator' && !(actor.kind === 'user' && actor.operator))
    return refuse('not_found', 'There is nothing here.');
  if (access.kind === 'signedIn' && actor.kind !== 'user')
    return refuse('forbidden', 'This needs a person who is signed in; a token cannot do it.');
  return accept(null);
}
