import { saveVersion as saveContract } from '@/contracts/network.ts';
import { saveVersion } from '@/server/network/save-version.ts';
import { endpoint } from '@/server/http/endpoint.ts';

export const POST = endpoint(saveContract, ({ actor, parameters, body }) =>
  saveVersion({ actor, team: parameters['team']!, model: parameters['model']!, ...body }),
);
