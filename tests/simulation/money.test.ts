/**
 * Money under random interleavings of everything that can happen to it, on a real database and the payment fake: 2,000
 * sequences, invariants after every step. The seed is fixed; a failure prints seed and path, and
 * BURETTE_SIMULATION_SEED and BURETTE_SIMULATION_PATH replay it.
 */
import { existsSync } from 'node:fs';
import fc from 'fast-check';
import Stripe from 'stripe';
import { afterAll, expect, it, vi } from 'vitest';
import { verifyLedger } from '@/server/ledger/verify-ledger.ts';
import { startPaymentFake } from '@tests/fakes/payment/server.ts';
import { useTestDatabase } from '@tests/support/test-database.ts';
import { expectGaplessSeries, expectHealed, expectInvariants } from './money-invariants.ts';
import { actNames, MoneyWorld, webhookSecret } from './money-world.ts';

// In memory where the machine has such a place: a power cut is not among the acts.
if (existsSync('/dev/shm')) process.env.TMPDIR = '/dev/shm';

// The SDK asks again after half a second; here it does not wait.
vi.spyOn(
  Stripe.prototype as unknown as { getInitialNetworkRetryDelay(): number },
  'getInitialNetworkRetryDelay',
).mockReturnValue(0.001);

const fake = await startPaymentFake({ port: 0, webhookUrl: 'http://127.0.0.1:9', webhookSecret });
afterAll(() => fake.close());
useTestDatabase({ STRIPE_FAKE_URL: fake.url, STRIPE_WEBHOOK_SECRET: webhookSecret });

const act = fc.record({
  name: fc.constantFrom(...actNames),
  place: fc.nat(5),
  // Up to 40 credits, so that holds and refunds reach beyond a pack of 25 and stay within one of 100.
  amount: fc.integer({ min: 1, max: 40_000_000 }),
});
const { BURETTE_SIMULATION_SEED: seed = '20261201', BURETTE_SIMULATION_PATH: path } = process.env;

it('keeps every invariant after every step of 2,000 sequences', async () => {
  await fc.assert(
    fc.asyncProperty(fc.nat(3), fc.array(act, { minLength: 4, maxLength: 10 }), async (begun, acts) => {
      const world = await MoneyWorld.open(fake);
      // Most sequences begin with something bought, so that there is something to lose.
      if (begun > 0) await world.buyOnePack();
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
