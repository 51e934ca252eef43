/** Reads an SBML file for a team without storing it. */
import type { Actor } from '@/domain/teams/actor.ts';
import type { NetworkDocument, Problem } from '@/domain/network/document.ts';
import { checkNetwork } from '@/domain/network/check-network.ts';
import { accept, refuse, type Result } from '@/domain/refusals.ts';
import { readSbml } from '@/formats/sbml/read-sbml.ts';
import { authorise } from '../teams/authorise.ts';

export interface ImportedNetwork {
  name: string;
  network: NetworkDocument;
  problems: Problem[];
}

/** The problems name element, line and column where the file is at fault. */
export async function importSbml(options: {
  actor: Actor;
  team: string;
  text: string;
}): Promise<Result<ImportedNetwork>> {
  const authorised = await authorise({ actor: options.actor, team: options.team, permission: 'models:write' });
  if (!authorised.ok) return authorised;
  const read = readSbml(options.text);
  if (!read.ok)
    return refuse(
      'unreadable_file',
      'The SBML file cannot be used as it is; nothing was stored. See what and where below.',
      {
        errors: read.problems.slice(0, 200).map(({ path, code, message }) => ({ path, code, message })),
      },
    );
  return accept({
    name: read.name ?? 'Imported model',
    network: read.document,
    problems: [...read.notes, ...checkNetwork(read.document)],
  });
}
