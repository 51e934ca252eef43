/** Launching: every refusal leaves no trace, and two launches racing for the last credits are told apart. */
import { beforeAll, describe, expect, it } from 'vitest';
import { inWriteTransaction } from '@db/in-write-transaction.ts';
import { Job, Quote } from '@db/models/jobs.ts';
import { ProjectCode } from '@db/models/teams.ts';
import { limits } from '@/domain/limits.ts';
import { nowMs, setClock } from '@/server/clock.ts';
import { newId } from '@/server/ids.ts';
import { setExecutor } from '@/server/jobs/executor.ts';
import { launchJob } from '@/server/jobs/launch-job.ts';
import { readBalance } from '@/server/ledger/read-balance.ts';
import { inProcessExecutor, makeBench, quote, value, type Bench } from '@tests/support/jobs.ts';
import { useTestDatabase } from '@tests/support/test-database.ts';

useTestDatabase();
beforeAll(() => setExecutor(inProcessExecutor()));

const launchWith = (bench: Bench, quoteId: string, more: { capMicrocredits?: number; projectCode?: string } = {}) =>
  launchJob({ actor: bench.actors.modeller, team: bench.team.slug, quoteId, name: 'Job', ...more });

/** A refusal that left nothing behind. */
async function expectRefused(
  bench: Bench,
  refused: Awaited<ReturnType<typeof launchJob>>,
  code: string,
): Promise<void> {
  expect(refused).toMatchObject({ ok: false, code });
  expect(await Job.count({ where: { teamId: bench.team.id } })).toBe(0);
  expect((await readBalance(bench.team.id)).held).toBe(0);
}

describe('launching a job', () => {
  it('holds the cap, which is the quote’s upper estimate unless another is given', async () => {
    const bench = await makeBench({ credits: 10 });
    const { id, microcredits } = await quote(bench);
    const { job } = value(await launchWith(bench, id));
    expect(job).toMatchObject({
      state: 'queued',
      capMicrocredits: microcredits.high,
      heldMicrocredits: microcredits.high,
    });
    const balance = await readBalance(bench.team.id);
    expect(balance).toMatchObject({ held: microcredits.high, available: 10_000_000 - microcredits.high });
  });

  it('refuses a quote of another team, an expired one and one used before', async () => {
    const bench = await makeBench();
    const other = await makeBench();
    await expectRefused(bench, await launchWith(bench, (await quote(other)).id), 'not_found');
    const { id } = await quote(bench);
    const later = nowMs() + limits.quoteMinutes * 60_000 + 1;
    setClock(() => later);
    try {
      await expectRefused(bench, await launchWith(bench, id), 'quote_expired');
    } finally {
      setClock(null);
    }
    value(await launchWith(bench, id));
    expect(await launchWith(bench, id)).toMatchObject({ ok: false, code: 'quote_used' });
    expect(await Job.count({ where: { teamId: bench.team.id } })).toBe(1);
  });

  it('refuses a cap below the upper estimate of 30 replicates, such as 0 or less than one replicate', async () => {
    const bench = await makeBench();
    const { id, leastCapMicrocredits, eventsPerReplicate } = await quote(bench);
    expect(leastCapMicrocredits).toBeGreaterThanOrEqual(30 * eventsPerReplicate.mean);
    for (const capMicrocredits of [0, 1, Math.floor(eventsPerReplicate.mean) - 1, leastCapMicrocredits - 1])
      await expectRefused(bench, await launchWith(bench, id, { capMicrocredits }), 'cap_too_low');
    value(await launchWith(bench, id, { capMicrocredits: leastCapMicrocredits }));
  });

  it('refuses what the team cannot pay', async () => {
    const bench = await makeBench({ credits: 0.001 });
    const { id } = await quote(bench);
    await expectRefused(bench, await launchWith(bench, id), 'insufficient_credits');
    expect((await Quote.findByPk(id))!.usedByJobId).toBeNull();
  });

  it('books on an open project code of the team, and refuses a closed one and one of another team', async () => {
    const bench = await makeBench();
    const other = await makeBench();
    const codes = await inWriteTransaction(async () => {
      const make = (teamId: string, code: string, closedAt: string | null) =>
        ProjectCode.create({ id: newId('project'), teamId, code, closedAt, createdAt: '2026-12-01T00:00:00.000Z' });
      return {
        open: await make(bench.team.id, 'OPEN-1', null),
        closed: await make(bench.team.id, 'SHUT-1', '2026-12-01T00:00:00.000Z'),
        foreign: await make(other.team.id, 'ELSE-1', null),
      };
    });
    const { id } = await quote(bench);
    await expectRefused(bench, await launchWith(bench, id, { projectCode: codes.closed.id }), 'project_code_closed');
    await expectRefused(bench, await launchWith(bench, id, { projectCode: codes.foreign.id }), 'not_found');
    const { job } = value(await launchWith(bench, id, { projectCode: 'OPEN-1' }));
    expect(job.projectCode).toEqual({ id: codes.open.id, code: 'OPEN-1' });
  });

  it('lets finance and viewers look but not launch', async () => {
    const bench = await makeBench();
    const { id } = await quote(bench);
    for (const role of ['finance', 'viewer'] as const) {
      const refused = await launchJob({ actor: bench.actors[role], team: bench.team.slug, quoteId: id, name: 'Job' });
      await expectRefused(bench, refused, 'forbidden');
    }
  });
});

describe('two launches racing for the last credits', () => {
  it('end with exactly one job, every time', async () => {
    for (let round = 0; round < 5; round++) {
      const bench = await makeBench({ credits: 1 });
      const quotes = [await quote(bench), await quote(bench)];
      // Each takes more than half.
      const outcomes = await Promise.all(quotes.map(({ id }) => launchWith(bench, id, { capMicrocredits: 600_000 })));
      expect(outcomes.map(({ ok }) => ok).sort()).toEqual([false, true]);
      expect(outcomes.find(({ ok }) => !ok)).toMatchObject({ code: 'insufficient_credits' });
      expect(await readBalance(bench.team.id)).toMatchObject({ available: 400_000, held: 600_000 });
      expect(await Job.count({ where: { teamId: bench.team.id } })).toBe(1);
    }
  });

  it('end with exactly one job when both use the same quote', async () => {
    const bench = await makeBench();
    const { id } = await quote(bench);
    const outcomes = await Promise.all(Array.from({ length: 8 }, () => launchWith(bench, id)));
    expect(outcomes.filter(({ ok }) => ok)).toHaveLength(1);
    expect(
      outcomes.filter(({ ok }) => !ok).every((refused) => 'code' in refused && refused.code === 'quote_used'),
    ).toBe(true);
  });
});
