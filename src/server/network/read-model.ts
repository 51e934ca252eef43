/** Reads one model with all its versions, newest first. */
import { ModelVersion } from '@db/models/models.ts';
import type { Actor } from '@/domain/teams/actor.ts';
import { accept, type Result } from '@/domain/refusals.ts';
import { authorise } from '../teams/authorise.ts';
import { findModel } from './find-model.ts';
import { presentModel, type PresentedModel } from './list-models.ts';
import { presentVersion } from './present-version.ts';

export async function readModel(options: {
  actor: Actor;
  team: string;
  model: string;
}): Promise<Result<{ model: PresentedModel; versions: ReturnType<typeof presentVersion>[] }>> {
  const authorised = await authorise({ actor: options.actor, team: options.team, permission: 'models:read' });
  if (!authorised.ok) return authorised;
  const model = await findModel({ teamId: authorised.value.team.id, model: options.model });
  if (!model.ok) return model;
  const versions = await ModelVersion.findAll({ where: { modelId: model.value.id }, order: [['number', 'DESC']] });
  return accept({ model: presentModel(model.value, versions[0]!), versions: versions.map(presentVersion) });
}
