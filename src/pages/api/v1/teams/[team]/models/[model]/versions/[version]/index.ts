import { readVersion as readContract } from '@/contracts/network.ts';
import { readVersion } from '@/server/network/read-version.ts';
import { endpoint } from '@/server/http/endpoint.ts';

export const GET = endpoint(readContract, ({ actor, parameters }) =>
  readVersion({
    actor,
    team: parameters['team']!,
    model: parameters['model']!,
    version: parameters['version']!,
  }),
);
