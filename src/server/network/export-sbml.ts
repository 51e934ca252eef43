/** Writes a version as SBML Level 3 Version 2. */
import type { Actor } from '@/domain/teams/actor.ts';
import { accept, type Result } from '@/domain/refusals.ts';
import { writeSbml } from '@/formats/sbml/write-sbml.ts';
import { authorise } from '../teams/authorise.ts';
import { findVersion } from './find-model.ts';

export async function exportSbml(options: {
  actor: Actor;
  team: string;
  model: string;
  version: string;
}): Promise<Result<{ text: string; fileName: string }>> {
  const authorised = await authorise({ actor: options.actor, team: options.team, permission: 'models:read' });
  if (!authorised.ok) return authorised;
  const found = await findVersion({ ...options, teamId: authorised.value.team.id });
  if (!found.ok) return found;
  const { model, version } = found.value;
  const stem =
    model.name
      .replaceAll(/[^A-Za-z0-9]+/g, '-')
      .replaceAll(/^-|-$/g, '')
      .slice(0, 60) || 'model';
  return accept({
    text: writeSbml(version.document, { modelId: model.id, name: model.name }),
    fileName: `${stem}-v${version.number}.xml`,
  });
}
