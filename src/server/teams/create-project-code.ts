/** Creates a project code; codes are unique in their team, letter case aside. */
import { inWriteTransaction } from '@db/in-write-transaction.ts';
import { ProjectCode } from '@db/models/teams.ts';
import { limits } from '@/domain/limits.ts';
import { accept, refuse, type Result } from '@/domain/refusals.ts';
import type { Actor } from '@/domain/teams/actor.ts';
import { nowText } from '../clock.ts';
import { newId } from '../ids.ts';
import { authorise } from './authorise.ts';
import { presentProjectCode, type PresentedProjectCode } from './list-project-codes.ts';

export interface CreateProjectCodeOptions {
  actor: Actor;
  team: string;
  code: string;
  client?: string | undefined;
  /** The client's purchase order. */
  poNumber?: string | undefined;
}

export async function createProjectCode(
  options: CreateProjectCodeOptions,
): Promise<Result<{ projectCode: PresentedProjectCode }>> {
  const { actor, code, client, poNumber } = options;
  return inWriteTransaction(async () => {
    const authorised = await authorise({ actor, team: options.team, permission: 'billing:write' });
    if (!authorised.ok) return authorised;
    const teamId = authorised.value.team.id;
    if (await ProjectCode.findOne({ where: { teamId, code } }))
      return refuse('invalid_input', `The code ${code} exists already.`, {
        errors: [{ path: 'code', code: 'taken', message: 'This code exists already.' }],
      });
    if ((await ProjectCode.count({ where: { teamId } })) >= limits.projectCodesPerTeam)
      return refuse('limit_reached', `A team has at most ${limits.projectCodesPerTeam} project codes.`);
    const row = await ProjectCode.create({
      id: newId('project'),
      teamId,
      code,
      client: client ?? null,
      poNumber: poNumber ?? null,
      createdAt: nowText(),
    });
    return accept({ projectCode: presentProjectCode(row) });
  });
}
