/** A team and what the asker may do in it. */
import type { Team } from '@db/models/people.ts';
import { accept, type Result } from '@/domain/refusals.ts';
import type { Actor } from '@/domain/teams/actor.ts';
import { permissionsOf, type Permission, type Role } from '@/domain/teams/permissions.ts';
import { authorise } from './authorise.ts';

export interface PresentedTeam {
  id: string;
  slug: string;
  name: string;
  timeZone: string;
  suspendedAt: string | null;
  suspensionReason: string | null;
  createdAt: string;
  roles: Role[];
  permissions: Permission[];
}

export function presentTeam(options: { team: Team; roles: readonly Role[]; actor: Actor }): PresentedTeam {
  const { team, roles, actor } = options;
  const { id, slug, name, timeZone, suspendedAt, suspensionReason, createdAt } = team;
  const held = permissionsOf(roles);
  const permissions = actor.kind === 'token' ? held.filter((one) => actor.scopes.includes(one)) : held;
  return { id, slug, name, timeZone, suspendedAt, suspensionReason, createdAt, roles: [...roles], permissions };
}

export async function readTeam(options: { actor: Actor; team: string }): Promise<Result<{ team: PresentedTeam }>> {
  const { actor } = options;
  const authorised = await authorise({ actor, team: options.team, permission: 'team:read' });
  if (!authorised.ok) return authorised;
  const { team, roles } = authorised.value;
  return accept({ team: presentTeam({ team, roles, actor }) });
}
