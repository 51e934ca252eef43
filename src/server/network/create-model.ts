/** Stores a new model as its version 1. */
import { inWriteTransaction } from '@db/in-write-transaction.ts';
import { ModelVersion, NetworkModel } from '@db/models/models.ts';
import type { NetworkDocument, Problem } from '@/domain/network/document.ts';
import type { Actor } from '@/domain/teams/actor.ts';
import { accept, type Result } from '@/domain/refusals.ts';
import { nowText } from '../clock.ts';
import { newId } from '../ids.ts';
import { authorise } from '../teams/authorise.ts';
import { checkDocument } from './check-document.ts';
import { presentStored, type StoredVersion } from './present-version.ts';

export interface CreateModelOptions {
  actor: Actor;
  team: string;
  name: string;
  network: NetworkDocument;
  note?: string | undefined;
  /** What an import wants to tell beside the checks. */
  notes?: Problem[];
}

export async function createModel(options: CreateModelOptions): Promise<Result<StoredVersion>> {
  const authorised = await authorise({ actor: options.actor, team: options.team, permission: 'models:write' });
  if (!authorised.ok) return authorised;
  const checked = checkDocument(options.network);
  if (!checked.ok) return checked;
  const { team, userId } = authorised.value;
  const createdAt = nowText();
  return inWriteTransaction(async () => {
    const model = await NetworkModel.create({
      id: newId('model'),
      teamId: team.id,
      name: options.name,
      createdBy: userId,
      createdAt,
    });
    const version = await ModelVersion.create({
      id: newId('version'),
      modelId: model.id,
      teamId: team.id,
      number: 1,
      contentHash: checked.value.contentHash,
      document: checked.value.document,
      note: options.note ?? '',
      createdBy: userId,
      createdAt,
    });
    return accept(presentStored(model, version, [...(options.notes ?? []), ...checked.value.problems]));
  });
}
