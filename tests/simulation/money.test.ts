/**
 * Money under random interleavings of everything that can happen to it, on a real database and the payment fake: 2,000
 * sequences, invariants after every step. The seed is fixed; a failure prints seed and path, and
 * BURETTE_SIMULATION_SEED and BURETTE_SIMULATION_PATH replay it.
 */
import { existsSync } from 'node:fs';
import fc from 'fast-check';
import { afterAll, expect, it } from 'vitest';
import { verifyLedger } from '@/server/ledger/verify-ledger.ts';
import { startPaymentFake } from '@tests/fakes/payment/server.ts';
import { useTestDatabase } from '@tests/support/test-database.ts';
import { expectGaplessSeries, expectHealed, expectInvariants } from './money-invariants.ts';
import { actNames, MoneyWorld, webhookSecret } from './money-world.ts';

// In memory where the machine has such a place: a power cut is not among the acts.
if (existsSync('/dev/shm')) process.env.TMPDIR = '/dev/shm';

const fake = await startPaymentFake({ port: 0, webhookUrl: 'http://127.0.0.1:9', webhookSecret });
afterAll(() => fake.close());
useTestDatabase({ STRIPE_FAKE_URL: fake.url, STRIPE_WEBHOOK_SECRET: webhookSecret });

const act = fc.record({
  // An outage costs half a second of the SDK's patience, so it is rarer than the rest.
  name: fc.oneof(
    { weight: 80, arbitrary: fc.constantFrom(...actNames.filter((name) => name !== 'serviceFails')) },
    { weight: 1, arbitrary: fc.constant('serviceFails' as const) },
  ),
  place: fc.nat(5),
  // Up to 40 credits, so that holds and refunds reach beyond a pack of 25 and stay within one of 100.
  amount: fc.integer({ min: 1, max: 40_000_000 }),
});
const { BURETTE_SIMULATION_SEED: seed = '20261201', BURETTE_SIMULATION_PATH: path } = process.env;

it('keeps every invariant after every step of 2,000 sequences', async () => {
  await fc.assert(
    fc.asyncProperty(fc.array(act, { minLength: 4, maxLength: 12 }), async (acts) => {
      const world = await MoneyWorld.open(fake);
      for (const [step, each] of acts.entries()) {
        await world.perform(String(step), each);
        await expectInvariants(world);
      }
      await world.heal();
      await expectInvariants(world);
      await expectHealed(world);
    }),
    {
      seed: Number(seed),
      numRuns: 2_000,
      ...(path ? { path } : {}),
      endOnFailure: Boolean(path),
    },
  );
  await expectGaplessSeries();
  expect(await verifyLedger()).toMatchObject({ ok: true });
}, 600_000);
