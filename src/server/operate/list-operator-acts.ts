/** What operators have done, newest first. */
import { OperatorAct } from '@db/models/finance.ts';
import { User } from '@db/models/people.ts';
import type { OperatorActDocument } from '@/contracts/operate.ts';
import { accept, type Result } from '@/domain/refusals.ts';
import type { Actor } from '@/domain/teams/actor.ts';
import { readPage, type PageRequest } from '../billing/page.ts';
import { requireOperator } from './require-operator.ts';
import { namesOfTeams } from './names-of-teams.ts';

export async function listOperatorActs(
  options: { actor: Actor } & PageRequest,
): Promise<Result<{ acts: OperatorActDocument[]; nextCursor: string | null }>> {
  const operator = requireOperator(options.actor);
  if (!operator.ok) return operator;
  const { rows, nextCursor } = await readPage(options, (query) => OperatorAct.findAll(query));
  const people = await User.findAll({ where: { id: rows.flatMap(({ userId }) => userId ?? []) } });
  const teamOf = await namesOfTeams(rows.flatMap(({ teamId }) => teamId ?? []));
  return accept({
    acts: rows.map(({ id, at, userId, act, teamId, subjectId, details }) => ({
      id,
      at,
      person: people.find((person) => person.id === userId)?.name ?? 'Burette',
      act,
      team: teamId === null ? null : teamOf(teamId),
      subjectId,
      details,
    })),
    nextCursor,
  });
}
