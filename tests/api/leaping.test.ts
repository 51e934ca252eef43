/** Tau-leaping over the real endpoints: the side-by-side of its quote, the job, its label everywhere, its archive and extension. */
import { mkdtemp, rm, writeFile } from 'node:fs/promises';
import { tmpdir } from 'node:os';
import path from 'node:path';
import { unzipSync } from 'fflate';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { verifyArchive } from '@/archives/verify/verify-archive.ts';
import {
  jobDocument,
  quoteDocument,
  statisticsDocument,
  type JobDocument,
  type QuoteDocument,
} from '@/contracts/jobs.ts';
import type { NetworkDocument } from '@/domain/network/document.ts';
import { bytesOf, forged, textOf } from '@tests/factories/archives.ts';
import { bearerHeaders } from '@tests/factories/people.ts';
import { callEndpoint } from '@tests/support/call-endpoint.ts';
import {
  immigrationDeath,
  inProcessExecutor,
  makeBench,
  quoteRequest,
  startJobs,
  whenOver,
  type Bench,
} from '@tests/support/jobs.ts';
import { useTestDatabase } from '@tests/support/test-database.ts';

useTestDatabase();

/** Reversible isomerisation of many molecules: exact mean of B at 1 is N · (1/1.5)(1 − e^−1.5) (Darvey & Staff 1966). */
const molecules = 60_000;
const meanOfB = (molecules / 1.5) * (1 - Math.exp(-1.5));
const isomerisation: NetworkDocument = {
  species: [
    { id: 'A', initialCount: molecules },
    { id: 'B', initialCount: 0 },
  ],
  reactions: [
    { id: 'forward', equation: 'A → B', rateLaw: { kind: 'massAction', constant: '1' } },
    { id: 'backward', equation: 'B → A', rateLaw: { kind: 'massAction', constant: '0.5' } },
  ],
};

let bench: Bench;
let headers: Record<string, string>;
let stop: () => Promise<void>;
let folder: string;
beforeAll(async () => {
  bench = await makeBench({ network: isomerisation });
  headers = await bearerHeaders({ user: bench.people.modeller, team: bench.team });
  stop = await startJobs(inProcessExecutor());
  folder = await mkdtemp(path.join(tmpdir(), 'burette-leaping-'));
});
afterAll(async () => {
  await stop();
  await rm(folder, { recursive: true, force: true });
});

const url = (route: string): string => `/api/v1/teams/${bench.team.slug}/${route}`;
const post = (route: string, body: unknown) => callEndpoint({ method: 'POST', path: url(route), headers, body });
const get = (route: string) => callEndpoint({ path: url(route), headers });
const wanted = { method: 'leap', epsilon: 0.02, horizon: 1, gridIntervals: 4, replicates: 300 };

const quoted = async (more = {}): Promise<QuoteDocument> => {
  const response = await post('quotes', { ...quoteRequest(bench), ...wanted, ...more });
  expect(response.status).toBe(201);
  return quoteDocument.parse(((await response.json()) as { quote: unknown }).quote);
};
const run = async (quote: QuoteDocument): Promise<JobDocument> => {
  const body = { quoteId: quote.id, name: 'Leaped', capMicrocredits: 2 * quote.microcredits.high };
  const response = await post('jobs', body);
  expect(response.status).toBe(201);
  const { job } = (await response.json()) as { job: JobDocument };
  await whenOver(job.id);
  return jobOf(job.id);
};
const jobOf = async (id: string): Promise<JobDocument> =>
  jobDocument.parse(((await (await get(`jobs/${id}`)).json()) as { job: unknown }).job);
const statisticsText = async (id: string): Promise<string> => (await get(`jobs/${id}/statistics`)).text();

describe('the quote of a leap job', () => {
  it('shows exact and leaped pilots side by side: events, price, speed, and means with the interval of their difference', async () => {
    const quote = await quoted();
    expect(quote).toMatchObject({ method: 'leap', epsilon: 0.02, kernel: 'tau-leaping' });
    const { exact, leap, leapDearer, observables } = quote.comparison!;
    // 60,000 molecules fire 0.8394 times each by time 1: mean events 50,358 (isomerisation of 50, by linear solve: 41.9652204428).
    const events = (41.9652204428 / 50) * molecules;
    const error = exact!.eventsPerReplicate.sd / Math.sqrt(exact!.pilotReplicates);
    expect(Math.abs(exact!.eventsPerReplicate.mean - events)).toBeLessThan(5 * error);
    expect(leap.eventsPerReplicate.mean).toBeLessThan(events / 50);
    expect(leap.eventsPerReplicate).toEqual(quote.eventsPerReplicate);
    // Each at its own family's rate of the Steady lane: 1 and 1.5 credits a million.
    expect([exact!.microcreditsPerMillionEvents, leap.microcreditsPerMillionEvents]).toEqual([1_000_000, 1_500_000]);
    expect(quote.microcreditsPerMillionEvents).toBe(1_500_000);
    expect(leap.microcredits).toBe(quote.microcredits.expected);
    expect(leapDearer).toBe(false);
    const b = observables.find(({ id }) => id === 'B')!;
    expect(Math.abs(b.exactMean - meanOfB)).toBeLessThan(5 * Math.sqrt(meanOfB / exact!.pilotReplicates));
    expect(b.difference).toBeCloseTo(b.leapMean - b.exactMean, 6);
    expect(b.interval!.low).toBeLessThan(b.difference);
    expect(b.interval!.high).toBeGreaterThan(b.difference);
  });

  it('says so where leaping is dearer: few molecules leap by exact steps at the dearer rate', async () => {
    const stored = await post('models', { name: 'Few', network: immigrationDeath() });
    const { version } = (await stored.json()) as { version: { id: string } };
    const { comparison, ...quote } = await quoted({ modelVersionId: version.id, horizon: 2 });
    expect(comparison).toMatchObject({ leapDearer: true });
    expect(quote.microcredits.expected).toBeGreaterThan(comparison!.exact!.microcredits);
  });

  it('has ε 0.03 unless it is given, and no comparison for the exact method', async () => {
    expect(await quoted({ epsilon: undefined })).toMatchObject({ epsilon: 0.03 });
    expect(await quoted({ method: 'exact', epsilon: undefined })).toMatchObject({ epsilon: null, comparison: null });
  });

  it('compares a sweep per replicate of a point', async () => {
    const target = { kind: 'initial_count', id: 'A' };
    const sweep = { kind: 'grid', axes: [{ target, values: [molecules, 2 * molecules] }] };
    const quote = await quoted({ sweep });
    const { exact, leap } = quote.comparison!;
    expect(leap.eventsPerReplicate).toEqual(quote.eventsPerReplicate);
    expect(leap.microcredits).toBe(quote.microcredits.expected);
    // On average over the points one and a half times what 60,000 molecules fire.
    const events = 1.5 * (41.9652204428 / 50) * molecules;
    expect(Math.abs(exact!.eventsPerReplicate.mean / events - 1)).toBeLessThan(0.01);
  });

  it('refuses triggered changes with a sentence', async () => {
    const network: NetworkDocument = {
      ...isomerisation,
      changes: [
        {
          id: 'refill',
          when: { kind: 'condition', condition: 'A < 5' },
          assignments: [{ variable: 'A', expression: '90' }],
        },
      ],
    };
    const stored = await post('models', { name: 'Refilled', network });
    const { version } = (await stored.json()) as { version: { id: string } };
    const response = await post('quotes', { ...quoteRequest(bench), ...wanted, modelVersionId: version.id });
    expect(response.status).toBe(422);
    expect(await response.json()).toMatchObject({
      code: 'invalid_input',
      errors: [{ path: 'method', message: expect.stringContaining('“refill”') as string }],
    });
  });
});

describe('a leap job', () => {
  it('runs, is labelled, and gives an archive that holds when it is run again', async () => {
    const job = await run(await quoted());
    expect(job).toMatchObject({
      state: 'done',
      method: 'leap',
      epsilon: 0.02,
      kernel: 'tau-leaping',
      replicatesDone: 300,
    });
    // Charged by the leap rate: floor(events · 1.5).
    expect(job.chargedMicrocredits).toBe(Math.floor(job.events * 1.5));
    const { observables } = statisticsDocument.parse(JSON.parse(await statisticsText(job.id)));
    const b = observables.find(({ id }) => id === 'B')!;
    expect(Math.abs(b.mean.at(-1)! / meanOfB - 1)).toBeLessThan(0.02);

    const bytes = new Uint8Array(await (await get(`jobs/${job.id}/archive`)).arrayBuffer());
    const text = (name: string): string => Buffer.from(unzipSync(bytes)[name]!).toString('utf8');
    expect(JSON.parse(text('job.json'))).toMatchObject({ method: 'leap', epsilon: 0.02, kernel: 'tau-leaping' });
    expect(text('README.txt')).toMatch(/approximate: tau-leaping, ε = 0\.02/);
    expect(text('README.txt').replaceAll(/\s+/g, ' ')).toContain('no interval here contains it');
    // KiSAO terms as published: tau-leaping 0000039, its error control 0000228.
    expect(text('simulation.sedml')).toContain('<algorithm kisaoID="KISAO:0000039">');
    expect(text('simulation.sedml')).toContain('kisaoID="KISAO:0000228" value="0.02"');

    const file = path.join(folder, 'leaped.zip');
    await writeFile(file, bytes);
    const report = await verifyArchive({ file, choose: (blocks) => Array.from({ length: blocks }, (_, i) => i) });
    expect(report).toMatchObject({ problems: [], reRun: report.blocks });
    // A figure says so by itself, wherever it is pasted.
    expect(text('figures/B-time-course.svg')).toContain('tau-leaping, approximate');

    // Another ε is found by running a block again, its checksums made to fit; an exact archive has none.
    for (const [more, words] of [
      [{ epsilon: 0.3 }, /differ|digest|not what/],
      [{ method: 'exact' }, /epsilon/],
    ] as const) {
      const altered = forged(bytes, (files) => {
        const job_ = JSON.parse(textOf(files['job.json'])) as object;
        files['job.json'] = bytesOf(JSON.stringify({ ...job_, ...more }));
      });
      await writeFile(file, altered);
      expect((await verifyArchive({ file, choose: () => [0] })).problems.join(' ')).toMatch(words);
    }
  });

  it('is continued by an extension with the same ε, and by no other', async () => {
    const whole = await run(await quoted({ replicates: 400 }));
    const first = await run(await quoted({ replicates: 150 }));
    const other = await quoted({ replicates: 250, epsilon: 0.05 });
    expect((await post(`jobs/${first.id}/extend`, { quoteId: other.id })).status).toBe(422);
    const more = await quoted({ replicates: 250 });
    const extended = await post(`jobs/${first.id}/extend`, {
      quoteId: more.id,
      capMicrocredits: 2 * more.microcredits.high,
    });
    expect(extended.status).toBe(200);
    await whenOver(first.id);
    expect(await jobOf(first.id)).toMatchObject({ replicatesDone: 400, resultsDigest: whole.resultsDigest });
    expect(await statisticsText(first.id)).toBe(await statisticsText(whole.id));
  });
});
