/** Lists a team's models, newest first, each with its latest version. */
import { Op } from 'sequelize';
import { ModelVersion, NetworkModel } from '@db/models/models.ts';
import type { Actor } from '@/domain/teams/actor.ts';
import { limits } from '@/domain/limits.ts';
import { accept, type Result } from '@/domain/refusals.ts';
import { authorise } from '../teams/authorise.ts';
import { presentVersion } from './present-version.ts';

export const presentModel = (model: NetworkModel, latest: ModelVersion) => ({
  id: model.id,
  name: model.name,
  createdAt: model.createdAt,
  latestVersion: presentVersion(latest),
  speciesCount: latest.document.species.length,
  reactionCount: latest.document.reactions.length,
});
export type PresentedModel = ReturnType<typeof presentModel>;

/** The version with the highest number of each model. */
async function latestVersions(modelIds: string[]): Promise<Map<string, ModelVersion>> {
  const versions = await ModelVersion.findAll({ where: { modelId: modelIds }, order: [['number', 'ASC']] });
  return new Map(versions.map((version) => [version.modelId, version]));
}

export async function listModels(options: {
  actor: Actor;
  team: string;
  limit?: number | undefined;
  cursor?: string | undefined;
}): Promise<Result<{ models: PresentedModel[]; nextCursor: string | null }>> {
  const authorised = await authorise({ actor: options.actor, team: options.team, permission: 'models:read' });
  if (!authorised.ok) return authorised;
  const limit = options.limit ?? limits.listPageDefault;
  const rows = await NetworkModel.findAll({
    where: {
      teamId: authorised.value.team.id,
      archivedAt: null,
      ...(options.cursor ? { id: { [Op.lt]: options.cursor } } : {}),
    },
    order: [['id', 'DESC']],
    limit: limit + 1,
  });
  const page = rows.slice(0, limit);
  const latest = await latestVersions(page.map(({ id }) => id));
  return accept({
    models: page.map((model) => presentModel(model, latest.get(model.id)!)),
    nextCursor: rows.length > limit ? (page.at(-1)?.id ?? null) : null,
  });
}
