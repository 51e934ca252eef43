/** Budgets at launch, under concurrency and over the turn of a month in the team's zone; alerts once a month by mail. */
import { afterEach, beforeAll, beforeEach, describe, expect, it } from 'vitest';
import { Job } from '@db/models/jobs.ts';
import { LedgerTransaction } from '@db/models/ledger.ts';
import { Mail } from '@db/models/teams.ts';
import { inWriteTransaction } from '@db/in-write-transaction.ts';
import { sendBudgetAlerts } from '@/server/budgets/send-budget-alerts.ts';
import { readBudgets } from '@/server/budgets/read-budgets.ts';
import { setBudgets } from '@/server/budgets/set-budgets.ts';
import { setClock } from '@/server/clock.ts';
import { setExecutor } from '@/server/jobs/executor.ts';
import { launchJob } from '@/server/jobs/launch-job.ts';
import { releaseHold } from '@/server/ledger/release-hold.ts';
import { settleCharge } from '@/server/ledger/settle-charge.ts';
import { createProjectCode } from '@/server/teams/create-project-code.ts';
import { inProcessExecutor, makeBench, quote, value, type Bench } from '@tests/support/jobs.ts';
import { useTestDatabase } from '@tests/support/test-database.ts';

useTestDatabase();
let bench: Bench;
let by: { actor: Bench['actors']['finance']; team: string };
let seed = 0;
beforeAll(() => setExecutor(inProcessExecutor()));
beforeEach(async () => {
  bench = await makeBench({ credits: 1_000 });
  by = { actor: bench.actors.finance, team: bench.team.slug };
});
afterEach(() => setClock(null));

const none = { monthlyMicrocredits: null, lowBalanceMicrocredits: null, projectCodes: [] };
const quoteId = async () => (await quote(bench, { replicates: 100, seed: String((seed += 1)) })).id;
const launchWith = async (capMicrocredits: number, projectCode?: string, id?: string) =>
  launchJob({
    actor: bench.actors.modeller,
    team: by.team,
    quoteId: id ?? (await quoteId()),
    name: 'Budgeted',
    capMicrocredits,
    projectCode,
  });
const used = async () => value(await readBudgets(by)).budgets.usedMicrocredits;
const segmentOf = async (jobId: string) => {
  const hold = (await LedgerTransaction.findOne({ where: { jobId, kind: 'hold' } }))!;
  return { teamId: bench.team.id, jobId, segmentId: hold.segmentId! };
};

describe('a monthly budget', () => {
  it('lets a launch through up to its last microcredit and refuses the next one in words, holding nothing', async () => {
    value(await setBudgets({ ...by, ...none, monthlyMicrocredits: 5_000_000 }));
    expect((await launchWith(3_000_000)).ok).toBe(true);
    const refused = await launchWith(2_000_001);
    expect(refused).toMatchObject({ ok: false, code: 'budget_exceeded' });
    expect(refused.ok ? '' : refused.detail).toBe(
      'This would hold 2.000001 credits; of the team’s monthly budget of 5 credits, 2 credits are neither spent nor held. ' +
        'Nothing was started. Lower the cap, or ask an owner or finance admin to raise the budget.',
    );
    expect(await Job.count({ where: { teamId: bench.team.id } })).toBe(1);
    expect((await launchWith(2_000_000)).ok).toBe(true);
    expect(await used()).toBe(5_000_000);
  });

  it('counts what came back no longer, and what was spent for good', async () => {
    value(await setBudgets({ ...by, ...none, monthlyMicrocredits: 5_000_000 }));
    const { job } = value(await launchWith(5_000_000));
    const segment = await segmentOf(job.id);
    await settleCharge({ ...segment, settlementId: job.id, chargeMicrocredits: 1_500_000, memo: { events: '1' } });
    expect(await used()).toBe(5_000_000);
    await releaseHold({ ...segment, releaseId: job.id });
    expect(await used()).toBe(1_500_000);
    expect((await launchWith(3_500_001)).ok).toBe(false);
    expect((await launchWith(3_500_000)).ok).toBe(true);
  });

  it('is not passed by launches at once: of twenty of a credit each, five fit', async () => {
    value(await setBudgets({ ...by, ...none, monthlyMicrocredits: 5_000_000 }));
    const ids: string[] = [];
    for (let count = 0; count < 20; count += 1) ids.push(await quoteId());
    const launched = await Promise.all(ids.map((id) => launchWith(1_000_000, undefined, id)));
    expect(launched.filter(({ ok }) => ok)).toHaveLength(5);
    expect(new Set(launched.flatMap((each) => (each.ok ? [] : [each.code])))).toEqual(new Set(['budget_exceeded']));
    expect(await used()).toBe(5_000_000);
  });

  it('begins anew with the month of the team’s own zone, and a job counts in the month of its launch', async () => {
    await inWriteTransaction(() => bench.team.update({ timeZone: 'Pacific/Auckland' }));
    value(await setBudgets({ ...by, ...none, monthlyMicrocredits: 2_000_000 }));
    // In January Auckland is 13 hours ahead: its February begins on 31 January, 11:00 UTC.
    setClock(() => Date.parse('2027-01-31T10:59:59Z'));
    const { job } = value(await launchWith(2_000_000));
    expect((await launchWith(1_000_000)).ok).toBe(false);
    setClock(() => Date.parse('2027-01-31T11:00:00Z'));
    const segment = await segmentOf(job.id);
    await settleCharge({ ...segment, settlementId: job.id, chargeMicrocredits: 2_000_000, memo: { events: '1' } });
    expect(await used()).toBe(0);
    expect((await launchWith(2_000_000)).ok).toBe(true);
  });

  it('of a project code binds its jobs alone', async () => {
    const { projectCode } = value(
      await createProjectCode({ actor: bench.actors.owner, team: by.team, code: 'NARROW-1' }),
    );
    value(await setBudgets({ ...by, ...none, projectCodes: [{ id: projectCode.id, monthlyMicrocredits: 1_000_000 }] }));
    expect((await launchWith(1_000_000, 'NARROW-1')).ok).toBe(true);
    const refused = await launchWith(1_000_000, 'NARROW-1');
    expect(refused.ok ? '' : refused.detail).toContain('the monthly budget of project code NARROW-1 of 1 credit');
    expect((await launchWith(1_000_000)).ok).toBe(true);
  });

  it('takes no project code of another team', async () => {
    const other = await makeBench();
    const { projectCode } = value(
      await createProjectCode({ actor: other.actors.owner, team: other.team.slug, code: 'THEIRS' }),
    );
    const answer = await setBudgets({ ...by, ...none, projectCodes: [{ id: projectCode.id, monthlyMicrocredits: 1 }] });
    expect(answer).toMatchObject({ ok: false, code: 'invalid_input' });
  });
});

describe('alerts', () => {
  const subjects = async () =>
    (await Mail.findAll({ where: { recipient: bench.people.finance.email }, order: [['id', 'ASC']] })).map(
      ({ subject }) => subject,
    );

  it('go to owners and finance admins at half, 80 % and all of the budget and at a low balance, each once a month', async () => {
    let at = Date.parse('2027-03-10T12:00:00Z');
    setClock(() => at);
    value(await setBudgets({ ...by, ...none, monthlyMicrocredits: 10_000_000, lowBalanceMicrocredits: 995_000_000 }));
    const team = bench.team.name;
    const expected: string[] = [];
    for (const [cap, alerts] of [
      [4_000_000, []],
      [1_000_000, [`50 % of the budget of ${team} used`]],
      [1_000_000, [`${team}: 994 credits left`]],
      [4_000_000, [`100 % of the budget of ${team} used`]],
    ] as [number, string[]][]) {
      value(await launchWith(cap));
      await sendBudgetAlerts();
      await sendBudgetAlerts();
      expected.push(...alerts);
      expect(await subjects()).toEqual(expected);
    }
    expect(await Mail.count({ where: { recipient: bench.people.owner.email } })).toBe(3);
    expect(await Mail.count({ where: { recipient: bench.people.modeller.email } })).toBe(0);
    at = Date.parse('2027-04-01T12:00:00Z');
    await sendBudgetAlerts();
    // A new month: the balance is still low, the budget is unused.
    expect(await subjects()).toEqual([...expected, `${team}: 990 credits left`]);
  });
});
