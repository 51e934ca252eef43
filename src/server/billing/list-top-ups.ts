/** Top-ups of the team, newest first. */
import { TopUp } from '@db/models/billing.ts';
import type { TopUpDocument } from '@/contracts/billing.ts';
import { accept, type Result } from '@/domain/refusals.ts';
import type { Actor } from '@/domain/teams/actor.ts';
import { authorise } from '../teams/authorise.ts';
import { describeTopUps } from './describe-top-up.ts';
import { readPage, type PageRequest } from './page.ts';

export async function listTopUps(
  options: { actor: Actor; team: string } & PageRequest,
): Promise<Result<{ topUps: TopUpDocument[]; nextCursor: string | null }>> {
  const authorised = await authorise({ ...options, permission: 'billing:read' });
  if (!authorised.ok) return authorised;
  const teamId = authorised.value.team.id;
  const { rows, nextCursor } = await readPage(options, ({ where, ...query }) =>
    TopUp.findAll({ where: { ...where, teamId }, ...query }),
  );
  return accept({ topUps: await describeTopUps(rows), nextCursor });
}
