/** The mean field of any network at all: an answer or a reason, in bounded work, and never an exception. */
import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { meanField } from '@/engine/meanfield/mean-field.ts';
import { networks } from '@tests/factories/random-networks.ts';

describe('meanField', () => {
  it.each([
    ['tame', true],
    ['wild', false],
  ])('answers or says why not on 150 %s random networks, within its budget', (_name, tame) => {
    const outcomes = new Map<string, number>();
    fc.assert(
      fc.property(networks({ tame }), (network) => {
        const answer = meanField({ network, horizon: 3, gridIntervals: 7, stepBudget: 2_000 });
        const outcome = answer.ok ? 'solved' : answer.reason;
        outcomes.set(outcome, (outcomes.get(outcome) ?? 0) + 1);
        if (answer.ok) {
          for (const { values } of answer.observables.slice(0, network.species.length)) {
            expect(values).toHaveLength(8);
            expect(values.every((value) => value >= 0 && value < Infinity)).toBe(true);
          }
        } else {
          expect(answer.message).not.toBe('');
          expect(answer.time).toBeLessThanOrEqual(3);
          expect(answer.reaction === null).toBe(answer.reason !== 'not_a_number');
        }
      }),
      { seed: 20261201, numRuns: 150 },
    );
    expect(outcomes.get('invalid_request')).toBeUndefined();
    expect(outcomes.get('solved') ?? 0).toBeGreaterThan(75);
  });
});
