/** Endpoint × who asks: every contract, against expectations derived from its access and the table of permissions. */
import { beforeEach, describe, expect, it } from 'vitest';
import { contracts } from '@/contracts/index.ts';
import { resetRateLimits } from '@/server/http/rate-limit.ts';
import { callEndpoint } from '../support/call-endpoint.ts';
import { useTestDatabase } from '../support/test-database.ts';
import { callOf, cases, expected, headersOf, outcomeOf, principals, setStage } from './matrix-cases.ts';

useTestDatabase();
beforeEach(resetRateLimits);

describe('every endpoint', () => {
  it('has a case in this matrix, and every case an endpoint', () => {
    expect(Object.keys(cases).sort()).toEqual(contracts.map(({ id }) => id).sort());
  });

  it.each(contracts)('$method $path lets through exactly those whom its access names', async (contract) => {
    const outcomes: Record<string, string> = {};
    const wanted: Record<string, string> = {};
    const stage = await setStage();
    for (const principal of principals) {
      const headers = await headersOf(principal, contract, stage);
      const response = await callEndpoint(callOf(contract, stage.made.team.slug, headers));
      outcomes[principal] = await outcomeOf(response);
      wanted[principal] = expected(contract, principal);
    }
    expect(outcomes).toEqual(wanted);
  });
});
