/** Stores a new version of a model, unless somebody saved another one meanwhile. */
import { inWriteTransaction } from '@db/in-write-transaction.ts';
import { ModelVersion } from '@db/models/models.ts';
import type { NetworkDocument } from '@/domain/network/document.ts';
import type { Actor } from '@/domain/teams/actor.ts';
import { accept, refuse, type Result } from '@/domain/refusals.ts';
import { nowText } from '../clock.ts';
import { newId } from '../ids.ts';
import { authorise } from '../teams/authorise.ts';
import { checkDocument } from './check-document.ts';
import { findModel } from './find-model.ts';
import { presentStored, type StoredVersion } from './present-version.ts';

export interface SaveVersionOptions {
  actor: Actor;
  team: string;
  model: string;
  network: NetworkDocument;
  /** The number of the version that was edited. */
  basedOn: number;
  note?: string | undefined;
}

/** Saving the content of the latest version again answers with that version and stores nothing. */
export async function saveVersion(options: SaveVersionOptions): Promise<Result<StoredVersion>> {
  const authorised = await authorise({ actor: options.actor, team: options.team, permission: 'models:write' });
  if (!authorised.ok) return authorised;
  const { team, userId } = authorised.value;
  const model = await findModel({ teamId: team.id, model: options.model });
  if (!model.ok) return model;
  const checked = checkDocument(options.network);
  if (!checked.ok) return checked;
  const { document, contentHash, problems } = checked.value;
  return inWriteTransaction(async () => {
    const latest = await ModelVersion.findOne({ where: { modelId: model.value.id }, order: [['number', 'DESC']] });
    if (!latest) throw new Error(`Model ${model.value.id} has no version.`);
    if (latest.contentHash === contentHash) return accept(presentStored(model.value, latest, problems));
    if (latest.number !== options.basedOn)
      return refuse(
        'version_conflict',
        `Version ${latest.number} was saved after version ${options.basedOn}, which you edited. Your changes are still in your draft; compare and save again.`,
      );
    const version = await ModelVersion.create({
      id: newId('version'),
      modelId: model.value.id,
      teamId: team.id,
      number: latest.number + 1,
      contentHash,
      document,
      note: options.note ?? '',
      createdBy: userId,
      createdAt: nowText(),
    });
    return accept(presentStored(model.value, version, problems));
  });
}
