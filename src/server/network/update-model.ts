/** Renames a model, or puts it away and back; versions and jobs are untouched. */
import { inWriteTransaction } from '@db/in-write-transaction.ts';
import type { Actor } from '@/domain/teams/actor.ts';
import { accept, type Result } from '@/domain/refusals.ts';
import { nowText } from '../clock.ts';
import { authorise } from '../teams/authorise.ts';
import { findModel } from './find-model.ts';

export async function updateModel(options: {
  actor: Actor;
  team: string;
  model: string;
  name?: string | undefined;
  archived?: boolean | undefined;
}): Promise<Result<{ model: { id: string; name: string } }>> {
  const authorised = await authorise({ actor: options.actor, team: options.team, permission: 'models:write' });
  if (!authorised.ok) return authorised;
  return inWriteTransaction(async () => {
    const found = await findModel({ teamId: authorised.value.team.id, model: options.model });
    if (!found.ok) return found;
    const model = found.value;
    if (options.name !== undefined) model.name = options.name;
    if (options.archived !== undefined) model.archivedAt = options.archived ? (model.archivedAt ?? nowText()) : null;
    await model.save();
    return accept({ model: { id: model.id, name: model.name } });
  });
}
