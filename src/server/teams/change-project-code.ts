/** Closes or reopens a project code, or changes its client or PO number. The code itself never changes: jobs carry it. */
import { inWriteTransaction } from '@db/in-write-transaction.ts';
import { ProjectCode } from '@db/models/teams.ts';
import { accept, refuse, type Result } from '@/domain/refusals.ts';
import type { Actor } from '@/domain/teams/actor.ts';
import { nowText } from '../clock.ts';
import { authorise } from './authorise.ts';
import { presentProjectCode, type PresentedProjectCode } from './list-project-codes.ts';

export interface ChangeProjectCodeOptions {
  actor: Actor;
  team: string;
  projectCode: string;
  client?: string | null | undefined;
  poNumber?: string | null | undefined;
  closed?: boolean | undefined;
}

export async function changeProjectCode(
  options: ChangeProjectCodeOptions,
): Promise<Result<{ projectCode: PresentedProjectCode }>> {
  const { actor, client, poNumber, closed } = options;
  return inWriteTransaction(async () => {
    const authorised = await authorise({ actor, team: options.team, permission: 'billing:write' });
    if (!authorised.ok) return authorised;
    const row = await ProjectCode.findOne({ where: { id: options.projectCode, teamId: authorised.value.team.id } });
    if (!row) return refuse('not_found', 'There is no such project code in this team.');
    await row.update({
      ...(client === undefined ? {} : { client }),
      ...(poNumber === undefined ? {} : { poNumber }),
      ...(closed === undefined ? {} : { closedAt: closed ? (row.closedAt ?? nowText()) : null }),
    });
    return accept({ projectCode: presentProjectCode(row) });
  });
}
