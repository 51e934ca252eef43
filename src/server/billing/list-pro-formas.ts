/** Pro-formas of the team, newest first. */
import { ProForma } from '@db/models/billing.ts';
import type { ProFormaDocument } from '@/contracts/billing.ts';
import { accept, type Result } from '@/domain/refusals.ts';
import type { Actor } from '@/domain/teams/actor.ts';
import { authorise } from '../teams/authorise.ts';
import { describeProFormas } from './describe-pro-formas.ts';
import { readPage, type PageRequest } from './page.ts';

export async function listProFormas(
  options: { actor: Actor; team: string } & PageRequest,
): Promise<Result<{ proFormas: ProFormaDocument[]; nextCursor: string | null }>> {
  const authorised = await authorise({ ...options, permission: 'billing:read' });
  if (!authorised.ok) return authorised;
  const teamId = authorised.value.team.id;
  const { rows, nextCursor } = await readPage(options, ({ where, ...query }) =>
    ProForma.findAll({ where: { ...where, teamId }, ...query }),
  );
  return accept({ proFormas: await describeProFormas(rows), nextCursor });
}
