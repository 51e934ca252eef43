/** What teams are called, for the operator's lists. */
import { Team } from '@db/models/people.ts';

export async function namesOfTeams(ids: string[]): Promise<(id: string) => { slug: string; name: string }> {
  const teams = await Team.findAll({ where: { id: [...new Set(ids)] }, attributes: ['id', 'slug', 'name'] });
  return (id) => {
    const team = teams.find((each) => each.id === id);
    if (!team) throw new Error(`There is no team ${id}.`);
    return { slug: team.slug, name: team.name };
  };
}
