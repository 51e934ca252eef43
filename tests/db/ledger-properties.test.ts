/**
 * The invariants of the ledger under random interleavings of everything that moves credits, on a real database.
 * The seed is fixed, so a failure replays; the model beside the database is plain sums.
 */
import fc from 'fast-check';
import { QueryTypes } from 'sequelize';
import { expect, it } from 'vitest';
import { database } from '@db/connection.ts';
import { inWriteTransaction } from '@db/in-write-transaction.ts';
import { accounts } from '@/domain/ledger/accounts.ts';
import { decideFrozenLot } from '@/server/ledger/decide-frozen-lot.ts';
import { freezeLot } from '@/server/ledger/freeze-lot.ts';
import { grantCredits } from '@/server/ledger/grant-credits.ts';
import { holdCredits } from '@/server/ledger/hold-credits.ts';
import { issueBoughtCredits } from '@/server/ledger/issue-bought-credits.ts';
import { readBalance } from '@/server/ledger/read-balance.ts';
import { readOpenLots } from '@/server/ledger/read-open-lots.ts';
import { readSegment } from '@/server/ledger/read-segment.ts';
import { refundLot } from '@/server/ledger/refund-lot.ts';
import { releaseHold } from '@/server/ledger/release-hold.ts';
import { settleCharge } from '@/server/ledger/settle-charge.ts';
import { verifyLedger } from '@/server/ledger/verify-ledger.ts';
import { plainTeam } from '@tests/support/plain-team.ts';
import { useTestDatabase } from '@tests/support/test-database.ts';

useTestDatabase();

const amount = fc.integer({ min: 1, max: 1_000 });
const which = fc.nat(3);
const act = fc.oneof(
  fc.record({ act: fc.constant('grant' as const), which, amount }),
  fc.record({ act: fc.constant('buy' as const), which, amount }),
  fc.record({ act: fc.constant('hold' as const), which, amount }),
  fc.record({ act: fc.constant('settle' as const), which, amount }),
  fc.record({ act: fc.constant('release' as const), which, amount }),
  fc.record({ act: fc.constant('refund' as const), which, amount }),
  fc.record({ act: fc.constant('freeze' as const), which, amount }),
  fc.record({ act: fc.constant('win' as const), which, amount }),
  fc.record({ act: fc.constant('lose' as const), which, amount }),
  fc.record({ act: fc.constant('crash' as const), which, amount }),
);
type Act = typeof act extends fc.Arbitrary<infer A> ? A : never;

class Crash extends Error {}

/** One act, named by its place in the sequence so that it can be repeated exactly. Impossible acts do nothing. */
async function perform(teamId: string, step: string, { act: name, which: place, amount: size }: Act): Promise<void> {
  const id = `${teamId}-${step}`;
  const segment = { teamId, jobId: `${teamId}-job${place}`, segmentId: `${teamId}-segment${place}` };
  const lotId = async () =>
    (await readOpenLots(teamId)).filter(({ source }) => source === 'bought')[place]?.id ?? 'none';
  await inWriteTransaction(async () => {
    switch (name) {
      case 'grant':
        return grantCredits({ teamId, amountMicrocredits: size, reason: 'Goodwill', grantId: id });
      case 'buy':
        return issueBoughtCredits({
          teamId,
          creditsMicrocredits: size,
          netMinor: size % 97,
          currency: 'EUR',
          purchaseId: id,
        });
      case 'hold': {
        const { heldMicrocredits, spentMicrocredits } = await readSegment(segment.segmentId);
        if (heldMicrocredits + spentMicrocredits > 0) return null;
        return holdCredits({ ...segment, amountMicrocredits: size, userId: null });
      }
      case 'settle': {
        const { heldMicrocredits } = await readSegment(segment.segmentId);
        const charge = size % (heldMicrocredits + 1);
        return settleCharge({
          ...segment,
          settlementId: id,
          chargeMicrocredits: charge,
          memo: { events: String(charge) },
        });
      }
      case 'release':
        return releaseHold({ ...segment, releaseId: id });
      case 'refund':
        return refundLot({ teamId, lotId: await lotId(), amountMicrocredits: size, refundId: id });
      case 'freeze':
        return freezeLot({ teamId, lotId: await lotId(), disputeId: `${teamId}-dispute${place}`, occasion: step });
      case 'win':
      case 'lose':
        return decideFrozenLot({
          teamId,
          lotId: await lotId(),
          disputeId: `${teamId}-dispute${step}`,
          outcome: name === 'win' ? 'won' : 'lost',
        });
      case 'crash':
        await grantCredits({ teamId, amountMicrocredits: size, reason: 'Never', grantId: id });
        throw new Crash();
    }
  }).catch((error: unknown) => {
    if (!(error instanceof Crash)) throw error;
  });
}

/** The invariants of the design, by plain sums over postings, lots and draws: independent of the code that wrote them. */
async function expectInvariants(teamId: string): Promise<void> {
  const sum = (account: string) =>
    `(SELECT coalesce(sum(amountMicrocredits), 0) FROM ledgerPostings WHERE teamId = $teamId AND account = '${account}') AS ${account}`;
  const [sums] = await database().query<Record<(typeof accounts)[number] | 'issued' | 'drawn', number>>(
    `SELECT ${accounts.map(sum).join(', ')},
       (SELECT coalesce(sum(creditsMicrocredits), 0) FROM lots WHERE teamId = $teamId) AS issued,
       (SELECT coalesce(sum(amountMicrocredits), 0) FROM lotDraws
        WHERE lotId IN (SELECT id FROM lots WHERE teamId = $teamId)) AS drawn`,
    { type: QueryTypes.SELECT, bind: { teamId } },
  );
  if (!sums) throw new Error('No sums.');
  const { issued, drawn, ...balance } = sums;
  expect(await readBalance(teamId)).toEqual(balance);
  const { available, held, frozen, spent, returned, bought, granted, earned } = balance;
  expect(Math.min(available, held, frozen, spent, returned)).toBeGreaterThanOrEqual(0);
  expect(Math.max(bought, granted, earned)).toBeLessThanOrEqual(0);
  expect(available + held + frozen + spent + returned + bought + granted + earned).toBe(0);
  expect(issued - drawn).toBe(available + held + frozen);
  expect(drawn).toBe(spent + returned);
  const totals = await Promise.all([0, 1, 2, 3].map((place) => readSegment(`${teamId}-segment${place}`)));
  expect(totals.reduce((total, { heldMicrocredits }) => total + heldMicrocredits, 0)).toBe(held);
  expect(totals.reduce((total, { spentMicrocredits }) => total + spentMicrocredits, 0)).toBe(spent);
}

it('keeps every invariant after every step, and repeating a step changes nothing', async () => {
  await fc.assert(
    fc.asyncProperty(fc.array(act, { minLength: 1, maxLength: 12 }), async (acts) => {
      const teamId = await plainTeam();
      for (const [step, each] of acts.entries()) {
        await perform(teamId, String(step), each);
        await expectInvariants(teamId);
        const before = await readBalance(teamId);
        if (['grant', 'buy', 'hold'].includes(each.act)) await perform(teamId, String(step), each);
        expect(await readBalance(teamId)).toEqual(before);
      }
    }),
    { seed: 20261201, numRuns: 100 },
  );
  expect(await verifyLedger()).toMatchObject({ ok: true });
}, 120_000);
