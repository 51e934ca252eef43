/** The ledger's verbs on a real database: who gets what, what is refused, and that repeating changes nothing. */
import { beforeEach, describe, expect, it } from 'vitest';
import { inWriteTransaction } from '@db/in-write-transaction.ts';
import { LedgerTransaction } from '@db/models/ledger.ts';
import { grantCredits } from '@/server/ledger/grant-credits.ts';
import { holdCredits } from '@/server/ledger/hold-credits.ts';
import { issueBoughtCredits } from '@/server/ledger/issue-bought-credits.ts';
import { readBalance } from '@/server/ledger/read-balance.ts';
import { readOpenLots } from '@/server/ledger/read-open-lots.ts';
import { releaseHold } from '@/server/ledger/release-hold.ts';
import { settleCharge } from '@/server/ledger/settle-charge.ts';
import { useTestDatabase } from '@tests/support/test-database.ts';
import { plainTeam } from '@tests/support/plain-team.ts';

useTestDatabase();
let teamId: string;
beforeEach(async () => {
  teamId = await plainTeam();
});
const segment = (name: string) => ({ teamId, jobId: `job-${teamId}-${name}`, segmentId: `segment-${teamId}-${name}` });

describe('the ledger verbs', () => {
  it('grant, hold, settle and release move credits between the accounts of money.md', async () => {
    await grantCredits({ teamId, amountMicrocredits: 10_000_000, reason: 'Welcome', grantId: `welcome:${teamId}` });
    expect(await readBalance(teamId)).toMatchObject({ available: 10_000_000, granted: -10_000_000, held: 0 });
    expect(await holdCredits({ ...segment('a'), amountMicrocredits: 4_000_000, userId: null })).toMatchObject({
      ok: true,
    });
    expect(await readBalance(teamId)).toMatchObject({ available: 6_000_000, held: 4_000_000 });
    await settleCharge({
      ...segment('a'),
      settlementId: `${teamId}-1`,
      chargeMicrocredits: 1_500_001,
      memo: { events: '1500001' },
    });
    expect(await releaseHold({ ...segment('a'), releaseId: `${teamId}-end` })).toEqual({
      releasedMicrocredits: 2_499_999,
    });
    expect(await readBalance(teamId)).toMatchObject({ available: 8_499_999, held: 0, spent: 1_500_001 });
  });

  it('refuse a hold beyond what is available and say both amounts', async () => {
    await grantCredits({ teamId, amountMicrocredits: 2_500_000, reason: 'Welcome', grantId: `welcome:${teamId}` });
    const held = await holdCredits({ ...segment('a'), amountMicrocredits: 2_500_001, userId: null });
    expect(held).toMatchObject({ ok: false, code: 'insufficient_credits' });
    expect(held.ok ? '' : held.detail).toContain('2.500001 credits; the team has 2.5 credits');
    expect(await readBalance(teamId)).toMatchObject({ available: 2_500_000, held: 0 });
  });

  it('change nothing when repeated', async () => {
    const grant = { teamId, amountMicrocredits: 5_000_000, reason: 'Welcome', grantId: `welcome:${teamId}` };
    const hold = { ...segment('a'), amountMicrocredits: 3_000_000, userId: null };
    const settlement = { ...segment('a'), settlementId: `${teamId}-1`, chargeMicrocredits: 7, memo: { events: '7' } };
    const release = { ...segment('a'), releaseId: `${teamId}-end` };
    for (let round = 0; round < 3; round += 1) {
      await grantCredits(grant);
      await holdCredits(hold);
      await settleCharge(settlement);
      await releaseHold(release);
    }
    expect(await LedgerTransaction.count({ where: { teamId } })).toBe(4);
    expect(await readBalance(teamId)).toMatchObject({ available: 4_999_993, held: 0, spent: 7 });
  });

  it('throw when the same act comes with another amount', async () => {
    const grant = { teamId, amountMicrocredits: 5, reason: 'Welcome', grantId: `welcome:${teamId}` };
    await grantCredits(grant);
    await expect(grantCredits({ ...grant, amountMicrocredits: 6 })).rejects.toThrow(/other postings/);
  });

  it('throw when a settlement exceeds what its segment holds, and leave nothing behind', async () => {
    await grantCredits({ teamId, amountMicrocredits: 5, reason: 'Welcome', grantId: `welcome:${teamId}` });
    await holdCredits({ ...segment('a'), amountMicrocredits: 2, userId: null });
    const settle = settleCharge({
      ...segment('a'),
      settlementId: `${teamId}-1`,
      chargeMicrocredits: 3,
      memo: { events: '3' },
    });
    await expect(settle).rejects.toThrow(/less than the charge/);
    expect(await readBalance(teamId)).toMatchObject({ available: 3, held: 2, spent: 0 });
  });

  it('let exactly one of two simultaneous holds have the last credits', async () => {
    await grantCredits({ teamId, amountMicrocredits: 100, reason: 'Welcome', grantId: `welcome:${teamId}` });
    const both = await Promise.all(
      ['a', 'b'].map((name) =>
        inWriteTransaction(() => holdCredits({ ...segment(name), amountMicrocredits: 60, userId: null })),
      ),
    );
    expect(both.map(({ ok }) => ok).sort()).toEqual([false, true]);
    expect(await readBalance(teamId)).toMatchObject({ available: 40, held: 60 });
  });

  it('draw grants before bought lots, oldest first', async () => {
    const buy = { teamId, currency: 'EUR', netMinor: 100 };
    await issueBoughtCredits({ ...buy, creditsMicrocredits: 10, purchaseId: `${teamId}-p1` });
    await issueBoughtCredits({ ...buy, creditsMicrocredits: 10, purchaseId: `${teamId}-p2` });
    await grantCredits({ teamId, amountMicrocredits: 10, reason: 'Welcome', grantId: `welcome:${teamId}` });
    await holdCredits({ ...segment('a'), amountMicrocredits: 25, userId: null });
    await settleCharge({
      ...segment('a'),
      settlementId: `${teamId}-1`,
      chargeMicrocredits: 13,
      memo: { events: '13' },
    });
    const lots = await readOpenLots(teamId);
    expect(lots.map(({ purchaseId, remainingMicrocredits }) => [purchaseId, remainingMicrocredits])).toEqual([
      [`${teamId}-p1`, 7],
      [`${teamId}-p2`, 10],
    ]);
  });
});
