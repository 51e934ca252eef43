/**
 * Another team's ids, everywhere: each endpoint whose path names a thing is asked for a real thing of team A through
 * team B's own path, by B's owner. Each must answer not_found; that A's owner finds it shows that the thing was there.
 */
import { beforeAll, beforeEach, describe, expect, it } from 'vitest';
import { inWriteTransaction } from '@db/in-write-transaction.ts';
import { TopUp } from '@db/models/billing.ts';
import { PriceBookRow } from '@db/models/ledger.ts';
import { ModelVersion } from '@db/models/models.ts';
import { WebhookDelivery } from '@db/models/webhooks.ts';
import { contracts } from '@/contracts/index.ts';
import { nowText } from '@/server/clock.ts';
import { markTransferReceived } from '@/server/billing/mark-transfer-received.ts';
import { requestProForma } from '@/server/billing/request-pro-forma.ts';
import { setBillingDetails } from '@/server/billing/set-billing-details.ts';
import { presentPriceBook } from '@/server/billing/present-price-book.ts';
import { resetRateLimits } from '@/server/http/rate-limit.ts';
import { newId } from '@/server/ids.ts';
import { setExecutor } from '@/server/jobs/executor.ts';
import { createProjectCode } from '@/server/teams/create-project-code.ts';
import { createToken } from '@/server/teams/create-token.ts';
import { inviteMember } from '@/server/teams/invite-member.ts';
import { createWebhook } from '@/server/webhooks/create-webhook.ts';
import { queueWebhook } from '@/server/webhooks/queue-webhook.ts';
import { makeTeam, signedInHeaders } from '../factories/people.ts';
import { callEndpoint } from '../support/call-endpoint.ts';
import { inProcessExecutor, launch, makeBench, quote, value, type Bench } from '../support/jobs.ts';
import { useTestDatabase } from '../support/test-database.ts';
import { callOf } from './matrix-cases.ts';

useTestDatabase();
beforeAll(() => setExecutor(inProcessExecutor()));
beforeEach(resetRateLimits);

const named = contracts.filter(({ path }) => /\{team\}.*\{\w+\}/.test(path));

/** One of everything that a path can name. */
async function thingsOf(bench: Bench): Promise<Record<string, string>> {
  const by = { actor: bench.actors.owner, team: bench.team.slug };
  const job = await launch(bench, { replicates: 100 });
  const version = (await ModelVersion.findByPk(bench.modelVersionId))!;
  value(
    await setBillingDetails({
      ...by,
      billingDetails: { name: 'A Ltd', address: '1 Row', country: 'GB', vatNumber: null, email: null },
    }),
  );
  const pack = (await presentPriceBook()).packs[0]!.id;
  const { proForma } = value(
    await requestProForma({ ...by, pack, currency: 'GBP', purchaseOrder: 'PO 1', termsDays: 30 }),
  );
  const system = { kind: 'system', reason: 'test' } as const;
  const { invoiceId } = value(await markTransferReceived({ actor: system, proFormaId: proForma.id }));
  const webhook = value(
    await createWebhook({ ...by, url: 'https://hooks.foreign.example/burette', kinds: ['balance_low'] }),
  ).webhook.id;
  await queueWebhook({ teamId: bench.team.id, kind: 'balance_low', occasion: 'test', data: {} });
  const delivery = (await WebhookDelivery.findOne({ where: { webhookId: webhook } }))!.id;
  return {
    webhook,
    delivery,
    model: version.modelId,
    version: String(version.number),
    quote: (await quote(bench, { replicates: 100 })).id,
    job: job.id,
    member: bench.members.viewer.id,
    invitation: value(await inviteMember({ ...by, email: 'x@foreign.example', roles: ['viewer'] })).invitation.id,
    projectCode: value(await createProjectCode({ ...by, code: 'A-1' })).projectCode.id,
    token: value(await createToken({ ...by, name: 'x', scopes: ['team:read'], expiresInDays: 1 })).token.id,
    topUp: await openTopUp(bench.team.id),
    invoice: invoiceId,
    proForma: proForma.id,
  };
}

/** As it stands while its checkout is open. */
async function openTopUp(teamId: string): Promise<string> {
  const id = newId('topup');
  const priceBookId = (await PriceBookRow.findOne())!.id;
  await inWriteTransaction(() =>
    TopUp.create({
      id,
      teamId,
      userId: null,
      state: 'pending',
      pack: 'test',
      priceBookId,
      creditsMicrocredits: 1,
      currency: 'GBP',
      netMinor: 1,
      taxMinor: 0,
      totalMinor: 1,
      tax: {} as never,
      buyer: {} as never,
      idempotencyKey: id,
      createdAt: nowText(),
      expiresAt: nowText(60_000),
    }),
  );
  return id;
}

describe('a thing of another team', () => {
  it.each(named)('is not found by $method $path', async (contract) => {
    const ids = await thingsOf(await makeBench());
    const unnamed = [...contract.path.matchAll(/\{(\w+)\}/g)].filter(([, name]) => name !== 'team' && !ids[name!]);
    expect(unnamed).toEqual([]);
    const { team, people } = await makeTeam();
    const answer = await callEndpoint(callOf(contract, team.slug, await signedInHeaders(people.owner), ids));
    const { code, detail } = (await answer.json()) as { code: string; detail: string };
    expect([answer.status, code]).toEqual([404, 'not_found']);
    for (const id of Object.values(ids)) if (id.length > 5) expect(detail).not.toContain(id);
  });

  it.each(named)('was there to be found by $method $path', async (contract) => {
    const bench = await makeBench();
    const ids = await thingsOf(bench);
    const headers = await signedInHeaders(bench.people.owner);
    const answer = await callEndpoint(callOf(contract, bench.team.slug, headers, ids));
    await answer.body?.cancel();
    expect(answer.status).not.toBe(404);
  });

  it('cannot be named in a body either: quotes, model versions, project codes', async () => {
    const mine = await makeBench();
    const theirs = await makeBench();
    const ids = await thingsOf(theirs);
    const headers = await signedInHeaders(mine.people.owner);
    const post = (rest: string, body: object) =>
      callEndpoint({ method: 'POST', path: `/api/v1/teams/${mine.team.slug}/${rest}`, body, headers });
    const job = await launch(mine, { replicates: 100 });
    const own = await quote(mine, { replicates: 100 });
    const request = { replicates: 10, horizon: 1, gridIntervals: 1, method: 'exact', lane: 'steady' };
    const answers = [
      await post('quotes', { ...request, modelVersionId: theirs.modelVersionId }),
      await post('jobs', { quoteId: ids['quote'], name: 'Job' }),
      await post('jobs', { quoteId: own.id, name: 'Job', projectCode: ids['projectCode'] }),
      await post(`jobs/${job.id}/extend`, { quoteId: ids['quote'] }),
    ];
    const codes = await Promise.all(answers.map(async (answer) => ((await answer.json()) as { code: string }).code));
    expect(codes.slice(0, 3)).toEqual(['not_found', 'not_found', 'not_found']);
    expect(['not_found', 'job_not_finished']).toContain(codes[3]);
  });
});
