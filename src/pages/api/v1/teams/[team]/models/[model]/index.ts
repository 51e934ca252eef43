import { readModel as readContract, updateModel as updateContract } from '@/contracts/network.ts';
import { readModel } from '@/server/network/read-model.ts';
import { updateModel } from '@/server/network/update-model.ts';
import { endpoint } from '@/server/http/endpoint.ts';

export const GET = endpoint(readContract, ({ actor, parameters }) =>
  readModel({ actor, team: parameters['team']!, model: parameters['model']! }),
);

export const PATCH = endpoint(updateContract, ({ actor, parameters, body }) =>
  updateModel({ actor, team: parameters['team']!, model: parameters['model']!, ...body }),
);
