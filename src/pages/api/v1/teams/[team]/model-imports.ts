import { importSbml as importContract } from '@/contracts/network.ts';
import { importSbml } from '@/server/network/import-sbml.ts';
import { endpoint } from '@/server/http/endpoint.ts';

export const POST = endpoint(importContract, ({ actor, parameters, textBody }) =>
  importSbml({ actor, team: parameters['team']!, text: textBody?.text ?? '' }),
);
