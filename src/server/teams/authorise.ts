/** Decides whether an actor may do something in a team. Every service of a team calls it first. */
import { Membership, Team, User } from '@db/models/people.ts';
import type { Actor } from '@/domain/teams/actor.ts';
import { mayDo, type Permission, type Role } from '@/domain/teams/permissions.ts';
import { accept, refuse, type Result } from '@/domain/refusals.ts';

export interface Authorised {
  team: Team;
  /** The person behind the session or token; null for our own processes. */
  userId: string | null;
  roles: readonly Role[];
}

/** Permissions that change nothing stay open to a suspended team. */
const reading = /:read$/;

/**
 * Signed out: `not_signed_in`. Not a member, or no such team: `not_found`, so that nothing about other teams leaks.
 * Member without the role, or token without the scope: `forbidden`.
 */
export async function authorise(options: {
  actor: Actor;
  team: string;
  permission: Permission;
}): Promise<Result<Authorised>> {
  const { actor, permission } = options;
  if (actor.kind === 'anonymous') return refuse('not_signed_in', 'Sign in, or send an API token.');
  const team = await Team.findOne({ where: { slug: options.team } });
  const absent = () => refuse('not_found', 'There is no such team, or you are not a member of it.');
  if (!team) return absent();
  if (actor.kind === 'system') return accept({ team, userId: null, roles: ['owner'] });
  if (actor.kind === 'token' && actor.teamId !== team.id) return absent();
  const membership = await Membership.findOne({ where: { teamId: team.id, userId: actor.userId, removedAt: null } });
  if (!membership) return absent();
  if (actor.kind === 'token' && !actor.scopes.includes(permission))
    return refuse('forbidden', `This token does not have the scope ${permission}.`);
  if (!mayDo(membership.roles, permission))
    return refuse('forbidden', `Your role in this team does not include “${permission}”. Ask an owner.`);
  if (team.suspendedAt && !reading.test(permission))
    return refuse(
      'team_suspended',
      'This team is suspended: everything can be read, nothing can be started or bought.',
    );
  const user = await User.findByPk(actor.userId);
  if (!user) return absent();
  return accept({ team, userId: user.id, roles: membership.roles });
}
