/** Verification from the last checkpoint: what it accepts, and that it falls back to everything when the past has changed. */
import { beforeAll, describe, expect, it } from 'vitest';
import { LedgerCheckpoint } from '@db/models/ledger.ts';
import { inWriteTransaction } from '@db/in-write-transaction.ts';
import { grantCredits } from '@/server/ledger/grant-credits.ts';
import { holdCredits } from '@/server/ledger/hold-credits.ts';
import { releaseHold } from '@/server/ledger/release-hold.ts';
import { settleCharge } from '@/server/ledger/settle-charge.ts';
import { watchLedger } from '@/server/ledger/watch-ledger.ts';
import { plainTeam } from '@tests/support/plain-team.ts';
import { useTestDatabase } from '@tests/support/test-database.ts';

useTestDatabase();
let segment: { teamId: string; jobId: string; segmentId: string };
beforeAll(async () => {
  const teamId = await plainTeam();
  segment = { teamId, jobId: 'job', segmentId: 'segment' };
  await grantCredits({ teamId, amountMicrocredits: 1_000, reason: 'Welcome', grantId: 'welcome' });
  await holdCredits({ ...segment, amountMicrocredits: 600, userId: null });
  await settleCharge({ ...segment, settlementId: '1', chargeMicrocredits: 250, memo: { events: '250' } });
});

describe('watchLedger', () => {
  it('remembers how far the ledger was whole and goes on from there, in the middle of a job', async () => {
    expect(await watchLedger({ full: true })).toMatchObject({ ok: true, transactions: 3 });
    await settleCharge({ ...segment, settlementId: '2', chargeMicrocredits: 50, memo: { events: '50' } });
    await releaseHold({ ...segment, releaseId: 'end' });
    expect(await watchLedger({ full: false })).toMatchObject({ ok: true, transactions: 5 });
    const rows = await LedgerCheckpoint.findAll({ order: [['id', 'ASC']] });
    expect(rows.map(({ sequence }) => sequence)).toEqual([3, 5]);
  });

  it('writes no checkpoint when nothing is new', async () => {
    await watchLedger({ full: false });
    expect(await LedgerCheckpoint.count()).toBe(2);
  });

  it('recomputes everything when the checkpoint names a transaction that is not there', async () => {
    const stranger = { id: null, sequence: 4, hash: 'f'.repeat(64), verifiedAt: '2026-12-01T00:00:00.000Z' };
    await inWriteTransaction(() => LedgerCheckpoint.create(stranger));
    expect(await watchLedger({ full: false })).toMatchObject({ ok: true, transactions: 5 });
  });
});
