/** Pro-formas whose transfer has not come, of all teams. */
import { ProForma } from '@db/models/billing.ts';
import type { ProFormaDocument } from '@/contracts/billing.ts';
import { accept, type Result } from '@/domain/refusals.ts';
import type { Actor } from '@/domain/teams/actor.ts';
import { describeProFormas } from '../billing/describe-pro-formas.ts';
import { readPage, type PageRequest } from '../billing/page.ts';
import { namesOfTeams } from './names-of-teams.ts';
import { requireOperator } from './require-operator.ts';

export type OpenTransfer = ProFormaDocument & { team: { slug: string; name: string } };

export async function listOpenTransfers(
  options: { actor: Actor } & PageRequest,
): Promise<Result<{ proFormas: OpenTransfer[]; nextCursor: string | null }>> {
  const operator = requireOperator(options.actor);
  if (!operator.ok) return operator;
  const { rows, nextCursor } = await readPage(options, ({ where, ...query }) =>
    ProForma.findAll({ where: { ...where, state: 'open' }, ...query }),
  );
  const teamOf = await namesOfTeams(rows.map(({ teamId }) => teamId));
  const described = await describeProFormas(rows);
  return accept({
    proFormas: described.map((each, index) => ({ ...each, team: teamOf(rows[index]!.teamId) })),
    nextCursor,
  });
}
