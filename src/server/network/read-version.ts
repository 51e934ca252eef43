/** Reads one version with its network and what the checks say of it today. */
import type { Actor } from '@/domain/teams/actor.ts';
import { checkNetwork } from '@/domain/network/check-network.ts';
import type { NetworkDocument, Problem } from '@/domain/network/document.ts';
import { accept, type Result } from '@/domain/refusals.ts';
import { authorise } from '../teams/authorise.ts';
import { findVersion } from './find-model.ts';
import { presentVersion } from './present-version.ts';

export async function readVersion(options: { actor: Actor; team: string; model: string; version: string }): Promise<
  Result<{
    model: { id: string; name: string };
    version: ReturnType<typeof presentVersion>;
    network: NetworkDocument;
    problems: Problem[];
  }>
> {
  const authorised = await authorise({ actor: options.actor, team: options.team, permission: 'models:read' });
  if (!authorised.ok) return authorised;
  const found = await findVersion({ ...options, teamId: authorised.value.team.id });
  if (!found.ok) return found;
  const { model, version } = found.value;
  return accept({
    model: { id: model.id, name: model.name },
    version: presentVersion(version),
    network: version.document,
    problems: checkNetwork(version.document),
  });
}
