/** Makes a team with its first owner. */
import { inWriteTransaction } from '@db/in-write-transaction.ts';
import { Team } from '@db/models/people.ts';
import { teamSlug } from '@/domain/teams/team-slug.ts';
import { nowText } from '../clock.ts';
import { newId } from '../ids.ts';
import { addMember } from './add-member.ts';

export interface CreateTeamOptions {
  name: string;
  ownerUserId: string;
  /** IANA name; default UTC. */
  timeZone?: string;
  /** What the slug is made from; default the name. A taken slug gets a number. */
  slugFrom?: string;
}

export async function createTeam(options: CreateTeamOptions): Promise<Team> {
  const { name, ownerUserId, timeZone = 'UTC', slugFrom = name } = options;
  return inWriteTransaction(async () => {
    const taken = new Set((await Team.findAll({ attributes: ['slug'] })).map(({ slug }) => slug));
    const slug = teamSlug(slugFrom, (wanted) => taken.has(wanted));
    const team = await Team.create({ id: newId('team'), slug, name, timeZone, createdAt: nowText() });
    await addMember({ teamId: team.id, userId: ownerUserId, roles: ['owner'] });
    return team;
  });
}
