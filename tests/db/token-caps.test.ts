/** A token's spending cap: decided in the launch transaction, so that launches which race stay within it together. */
import { beforeAll, describe, expect, it } from 'vitest';
import type { Actor } from '@/domain/teams/actor.ts';
import { setExecutor } from '@/server/jobs/executor.ts';
import { launchJob } from '@/server/jobs/launch-job.ts';
import { createToken } from '@/server/teams/create-token.ts';
import { listTokens } from '@/server/teams/list-tokens.ts';
import { inProcessExecutor, makeBench, quote, value, type Bench } from '../support/jobs.ts';
import { useTestDatabase } from '../support/test-database.ts';

useTestDatabase();
beforeAll(() => setExecutor(inProcessExecutor()));

async function tokenOf(bench: Bench, capMicrocredits: number | null): Promise<Actor & { kind: 'token' }> {
  const by = { actor: bench.actors.modeller, team: bench.team.slug };
  const made = await createToken({ ...by, name: 'script', scopes: ['jobs:launch'], expiresInDays: 1, capMicrocredits });
  const tokenId = value(made).token.id;
  const userId = bench.people.modeller.id;
  return { kind: 'token', userId, teamId: bench.team.id, tokenId, scopes: ['jobs:launch'] };
}
const launchBy = async (bench: Bench, actor: Actor, capMicrocredits: number) =>
  launchJob({ actor, team: bench.team.slug, quoteId: (await quote(bench)).id, name: 'Capped', capMicrocredits });
const usedBy = async (bench: Bench, tokenId: string) => {
  const { tokens } = value(await listTokens({ actor: bench.actors.owner, team: bench.team.slug }));
  return tokens.find(({ id }) => id === tokenId)!.usedMicrocredits;
};

describe('the cap of a token', () => {
  it('bounds ten launches that race to the three that fit, to the microcredit', async () => {
    const bench = await makeBench();
    const token = await tokenOf(bench, 3_000_000);
    const quotes = [];
    for (let count = 0; count < 10; count++) quotes.push((await quote(bench)).id);
    const launches = await Promise.all(
      quotes.map((quoteId) =>
        launchJob({ actor: token, team: bench.team.slug, quoteId, name: 'Racing', capMicrocredits: 1_000_000 }),
      ),
    );
    const refused = launches.filter((launched) => !launched.ok);
    expect(refused.map((launched) => !launched.ok && launched.code)).toEqual(Array(7).fill('budget_exceeded'));
    expect(await usedBy(bench, token.tokenId)).toBe(3_000_000);
  });

  it('does not bound its person at a browser, another token, or a token without one', async () => {
    const bench = await makeBench();
    const capped = await tokenOf(bench, 1_000_000);
    const free = await tokenOf(bench, null);
    value(await launchBy(bench, capped, 1_000_000));
    expect(await launchBy(bench, capped, 1_000_000)).toMatchObject({ ok: false, code: 'budget_exceeded' });
    value(await launchBy(bench, bench.actors.modeller, 1_000_000));
    value(await launchBy(bench, free, 1_000_000));
    expect([await usedBy(bench, capped.tokenId), await usedBy(bench, free.tokenId)]).toEqual([1_000_000, 1_000_000]);
  });
});
