/**
 * The same matrix with the guard in front of the endpoints taken away: each service must refuse by itself, because
 * pages and commands call services without passing that guard.
 */
import { beforeEach, describe, expect, it, vi } from 'vitest';
import { contracts } from '@/contracts/index.ts';
import { resetRateLimits } from '@/server/http/rate-limit.ts';
import { callEndpoint } from '../support/call-endpoint.ts';
import { useTestDatabase } from '../support/test-database.ts';
import { callOf, expected, headersOf, outcomeOf, principals, setStage } from './matrix-cases.ts';

vi.mock('@/server/http/admit.ts', () => ({ admit: async () => ({ ok: true, value: null }) }));

useTestDatabase();
beforeEach(resetRateLimits);

const guarded = contracts.filter(({ access }) => access.kind !== 'public');

describe('every service', () => {
  it.each(guarded)('behind $method $path refuses by itself', async (contract) => {
    const outcomes: Record<string, string> = {};
    const wanted: Record<string, string> = {};
    const stage = await setStage();
    for (const principal of principals) {
      if (expected(contract, principal) === 'through') continue;
      const headers = await headersOf(principal, contract, stage);
      const response = await callEndpoint(callOf(contract, stage.made.team.slug, headers));
      outcomes[principal] = await outcomeOf(response);
      wanted[principal] = expected(contract, principal);
    }
    expect(outcomes).toEqual(wanted);
  });
});
