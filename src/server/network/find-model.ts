/** Finds a model or one of its versions inside a team; what belongs to another team does not exist. */
import { ModelVersion, NetworkModel } from '@db/models/models.ts';
import { accept, refuse, type Result } from '@/domain/refusals.ts';

export async function findModel(options: { teamId: string; model: string }): Promise<Result<NetworkModel>> {
  const model = await NetworkModel.findOne({ where: { id: options.model, teamId: options.teamId } });
  return model ? accept(model) : refuse('not_found', 'There is no such model in this team.');
}

/** `version` is the number as it stands in a URL. */
export async function findVersion(options: {
  teamId: string;
  model: string;
  version: string;
}): Promise<Result<{ model: NetworkModel; version: ModelVersion }>> {
  const model = await findModel(options);
  if (!model.ok) return model;
  const number = /^[1-9]\d{0,8}$/.test(options.version) ? Number(options.version) : null;
  const version = number === null ? null : await ModelVersion.findOne({ where: { modelId: model.value.id, number } });
  return version
    ? accept({ model: model.value, version })
    : refuse('not_found', `This model has no version “${options.version.slice(0, 20)}”.`);
}
