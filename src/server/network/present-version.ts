/** How a stored version looks in answers. */
import type { ModelVersion, NetworkModel } from '@db/models/models.ts';
import type { Problem } from '@/domain/network/document.ts';

export const presentVersion = (version: ModelVersion) => ({
  id: version.id,
  number: version.number,
  contentHash: version.contentHash,
  note: version.note,
  createdAt: version.createdAt,
  createdBy: version.createdBy,
});

export const presentStored = (model: NetworkModel, version: ModelVersion, problems: Problem[]) => ({
  model: { id: model.id, name: model.name },
  version: { id: version.id, number: version.number, contentHash: version.contentHash },
  problems,
});
export type StoredVersion = ReturnType<typeof presentStored>;
