/** A person and the teams they belong to, as the API and the pages show them. */
import { Membership, Team, User } from '@db/models/people.ts';
import type { Role } from '@/domain/teams/permissions.ts';

export interface PresentedPerson {
  person: { id: string; name: string; email: string };
  teams: { slug: string; name: string; roles: Role[] }[];
}

/** Throws when there is no such person: callers have just authenticated them. */
export async function presentPerson(userId: string): Promise<PresentedPerson> {
  const user = await User.findByPk(userId, { rejectOnEmpty: true });
  const memberships = await Membership.findAll({ where: { userId, removedAt: null } });
  const teams = await Team.findAll({
    where: { id: memberships.map(({ teamId }) => teamId) },
    order: [['name', 'ASC']],
  });
  return {
    person: { id: user.id, name: user.name, email: user.email },
    teams: teams.map(({ id, slug, name }) => ({
      slug,
      name,
      roles: memberships.find(({ teamId }) => teamId === id)?.roles ?? [],
    })),
  };
}
