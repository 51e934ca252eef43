import * as contracts from '@/contracts/billing.ts';
import { listProFormas } from '@/server/billing/list-pro-formas.ts';
import { requestProForma } from '@/server/billing/request-pro-forma.ts';
import { endpoint } from '@/server/http/endpoint.ts';

export const GET = endpoint(contracts.listProFormas, ({ actor, parameters: { team = '' }, query }) =>
  listProFormas({ actor, team, ...query }),
);

export const POST = endpoint(contracts.requestProForma, ({ actor, parameters: { team = '' }, body }) =>
  requestProForma({ actor, team, ...body }),
);
