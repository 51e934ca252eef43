import { createModel as createContract, listModels as listContract } from '@/contracts/network.ts';
import { createModel } from '@/server/network/create-model.ts';
import { importSbml } from '@/server/network/import-sbml.ts';
import { listModels } from '@/server/network/list-models.ts';
import { endpoint } from '@/server/http/endpoint.ts';

export const GET = endpoint(listContract, ({ actor, parameters, query }) =>
  listModels({ actor, team: parameters['team']!, ...query }),
);

export const POST = endpoint(createContract, async ({ actor, parameters, query, body, textBody }) => {
  const team = parameters['team']!;
  if (!textBody) return createModel({ actor, team, ...body });
  const imported = await importSbml({ actor, team, text: textBody.text });
  if (!imported.ok) return imported;
  const { name, network, problems } = imported.value;
  const notes = problems.filter(({ path }) => path.startsWith('sbml'));
  return createModel({ actor, team, name: query.name ?? name, network, notes, note: 'Imported from SBML' });
});
