import * as contracts from '@/contracts/billing.ts';
import { readCard } from '@/server/billing/read-card.ts';
import { removeCard } from '@/server/billing/remove-card.ts';
import { saveCard } from '@/server/billing/save-card.ts';
import { endpoint } from '@/server/http/endpoint.ts';

export const GET = endpoint(contracts.readCard, ({ actor, parameters: { team = '' } }) => readCard({ actor, team }));

export const POST = endpoint(contracts.saveCard, ({ actor, parameters: { team = '' }, idempotency }) =>
  saveCard({ actor, team, idempotency }),
);

export const DELETE = endpoint(contracts.removeCard, ({ actor, parameters: { team = '' } }) =>
  removeCard({ actor, team }),
);
