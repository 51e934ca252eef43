import { changeProjectCode } from '@/contracts/teams.ts';
import { changeProjectCode as change } from '@/server/teams/change-project-code.ts';
import { endpoint } from '@/server/http/endpoint.ts';

export const PATCH = endpoint(changeProjectCode, ({ actor, parameters, body }) =>
  change({ actor, team: parameters['team'] ?? '', projectCode: parameters['projectCode'] ?? '', ...body }),
);
