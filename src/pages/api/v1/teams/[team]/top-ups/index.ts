import * as contracts from '@/contracts/billing.ts';
import { listTopUps } from '@/server/billing/list-top-ups.ts';
import { startTopUp } from '@/server/billing/start-top-up.ts';
import { endpoint } from '@/server/http/endpoint.ts';

export const GET = endpoint(contracts.listTopUps, ({ actor, parameters: { team = '' }, query }) =>
  listTopUps({ actor, team, ...query }),
);

export const POST = endpoint(contracts.startTopUp, ({ actor, parameters: { team = '' }, body, idempotency }) =>
  startTopUp({ actor, team, ...body, idempotency }),
);
