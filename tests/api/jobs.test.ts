/** Quotes and jobs over the real endpoints: the main path, bad input, and nothing of another team. */
import { createHash } from 'node:crypto';
import { unzipSync } from 'fflate';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { inWriteTransaction } from '@db/in-write-transaction.ts';
import { PilotRun } from '@db/models/jobs.ts';
import { contracts } from '@/contracts/index.ts';
import {
  jobDocument,
  passagesDocument,
  quoteDocument,
  statisticsDocument,
  correlationsDocument,
  type JobDocument,
  type QuoteDocument,
} from '@/contracts/jobs.ts';
import { archiveFiles } from '@/contracts/archives.ts';
import { limits } from '@/domain/limits.ts';
import { nowText } from '@/server/clock.ts';
import { newId } from '@/server/ids.ts';
import { bearerHeaders } from '@tests/factories/people.ts';
import { callEndpoint } from '@tests/support/call-endpoint.ts';
import { inProcessExecutor, makeBench, quoteRequest, startJobs, whenOver, type Bench } from '@tests/support/jobs.ts';
import { useTestDatabase } from '@tests/support/test-database.ts';

useTestDatabase();

let bench: Bench;
let headers: Record<string, string>;
let stop: () => Promise<void>;
beforeAll(async () => {
  bench = await makeBench();
  headers = await bearerHeaders({ user: bench.people.modeller, team: bench.team });
  stop = await startJobs(inProcessExecutor());
});
afterAll(() => stop());

const post = (route: string, body: unknown, more: Record<string, string> = {}, of = bench) =>
  callEndpoint({
    method: 'POST',
    path: `/api/v1/teams/${of.team.slug}/${route}`,
    headers: { ...headers, ...more },
    body,
  });
const get = (route: string, more: Record<string, string> = {}) =>
  callEndpoint({ path: `/api/v1/teams/${bench.team.slug}/${route}`, headers: { ...headers, ...more } });

interface Problem {
  code: string;
  detail: string;
  errors?: { path: string; message: string }[];
}
const problem = async (response: Response): Promise<Problem & { status: number }> => ({
  ...((await response.json()) as Problem),
  status: response.status,
});

const quoted = async (more = {}): Promise<QuoteDocument> => {
  const response = await post('quotes', { ...quoteRequest(bench), ...more });
  expect(response.status).toBe(201);
  return ((await response.json()) as { quote: QuoteDocument }).quote;
};
const launched = async (quote: QuoteDocument): Promise<JobDocument> => {
  const capMicrocredits = 2 * quote.microcredits.high;
  const response = await post('jobs', { quoteId: quote.id, name: 'Over HTTP', capMicrocredits });
  expect(response.status).toBe(201);
  return ((await response.json()) as { job: JobDocument }).job;
};

describe('the main path', () => {
  it('quotes, launches, runs, and answers what the contracts say', async () => {
    const quote = quoteDocument.parse(await quoted());
    expect(quote.pilot.replicates).toBeGreaterThanOrEqual(limits.pilotReplicatesMinimum);
    // Immigration-death from 0, birth 20, death 1, horizon 10: arrivals 200, departures 200 − 20(1 − e^−10) on average
    // (first moment of the linear process, from memory). The pilot's own error: |z| < 4.
    const expected = 400 - 20 * (1 - Math.exp(-10));
    const { mean, sd } = quote.eventsPerReplicate;
    expect(Math.abs(mean - expected)).toBeLessThan((4 * sd) / Math.sqrt(quote.pilot.replicates));
    expect(quote.microcredits.low).toBeLessThanOrEqual(quote.microcredits.expected);
    expect(quote.microcredits.expected).toBeLessThanOrEqual(quote.microcredits.high);

    const { id } = await launched(quote);
    await whenOver(id);
    const { job } = (await (await get(`jobs/${id}`)).json()) as { job: JobDocument };
    expect(jobDocument.parse(job)).toMatchObject({
      state: 'done',
      replicatesDone: 1_000,
      stopReason: 'replicates_reached',
    });

    const statistics = statisticsDocument.parse(await (await get(`jobs/${id}/statistics?point=0`)).json());
    expect(statistics.observables.map(({ id: observable }) => observable)).toEqual(['X']);
    expect(statistics.events.total).toBe(job.events);

    const distribution = (await (await get(`jobs/${id}/distribution?observable=X&time=9.9`)).json()) as {
      time: number;
      counts: number[];
      modes: { pValue: number; moreThanOne: boolean };
    };
    expect(distribution.time).toBe(10);
    expect(distribution.modes.moreThanOne).toBe(false);
    expect(distribution.modes.pValue).toBeGreaterThan(0.01);
    expect(distribution.counts.reduce((sum, count) => sum + count, 0)).toBe(1_000);

    const traces = (await (await get(`jobs/${id}/traces?limit=3`)).json()) as { traces: { values: number[][] }[] };
    expect(traces.traces).toHaveLength(3);
    expect(traces.traces[0]!.values[0]).toHaveLength(21);

    const strip = (await (await get(`jobs/${id}/batches`)).json()) as {
      cells: { state: string; replicates: number }[];
    };
    expect(strip.cells.every(({ state }) => state === 'delivered')).toBe(true);
    expect(strip.cells.reduce((sum, { replicates }) => sum + replicates, 0)).toBe(1_000);

    const list = (await (await get('jobs?state=done&limit=1')).json()) as { jobs: JobDocument[] };
    expect(list.jobs[0]!.id).toBe(id);
  });

  it('runs a model with timed and triggered changes: a reset at 5 shows at the grid time 5 of every replicate', async () => {
    const decay = {
      species: [{ id: 'X', initialCount: 40 }],
      reactions: [{ id: 'decay', equation: 'X -> ∅', rateLaw: { kind: 'massAction', constant: '0.01' } }],
      changes: [
        { id: 'reset', when: { kind: 'time', time: '5' }, assignments: [{ variable: 'X', expression: '7' }] },
        {
          id: 'refill',
          when: { kind: 'condition', condition: 'X < 5' },
          assignments: [{ variable: 'X', expression: '90' }],
        },
      ],
    };
    const stored = await post('models', { name: 'Dosed decay', network: decay });
    expect(stored.status).toBe(201);
    const { version } = (await stored.json()) as { version: { id: string } };
    const { id } = await launched(
      await quoted({ modelVersionId: version.id, replicates: 200, horizon: 10, gridIntervals: 2 }),
    );
    await whenOver(id);
    const statistics = statisticsDocument.parse(await (await get(`jobs/${id}/statistics`)).json());
    const [observable] = statistics.observables;
    expect([observable!.mean[1], observable!.sd[1]]).toEqual([7, 0]);
    expect(observable!.mean[2]).toBeLessThan(90);
  });

  it('answers covariances asked for, exactly −1 correlated where A + B is kept, and refuses what is no pair of counts', async () => {
    const turnover = {
      species: [
        { id: 'A', initialCount: 30 },
        { id: 'B', initialCount: 0 },
      ],
      reactions: [
        { id: 'there', equation: 'A -> B', rateLaw: { kind: 'massAction', constant: '1' } },
        { id: 'back', equation: 'B -> A', rateLaw: { kind: 'massAction', constant: '2' } },
      ],
      observables: [{ id: 'share', expression: 'A / (A + B)' }],
    };
    const stored = await post('models', { name: 'Turnover of two', network: turnover });
    const { version } = (await stored.json()) as { version: { id: string } };
    const request = { modelVersionId: version.id, replicates: 200, horizon: 10, gridIntervals: 2 };
    const { id } = await launched(await quoted({ ...request, outputs: { correlations: ['A', 'B'] } }));
    await whenOver(id);
    const found = correlationsDocument.parse(await (await get(`jobs/${id}/correlations`)).json());
    const statistics = statisticsDocument.parse(await (await get(`jobs/${id}/statistics`)).json());
    expect(found.pairs).toHaveLength(1);
    const [{ observables, covariance, correlation, correlationStandardError }] = found.pairs as [
      (typeof found.pairs)[number],
    ];
    expect(observables).toEqual(['A', 'B']);
    expect(covariance[2]).toBeCloseTo(-(statistics.observables[0]!.sd[2]! ** 2), 9);
    expect([covariance[0], correlation[0]]).toEqual([0, null]);
    expect([correlation[2], correlationStandardError[2]]).toEqual([-1, 0]);
    for (const correlations of [['A', 'C'], ['A', 'share'], ['A', 'A'], ['A']])
      expect(
        await problem(await post('quotes', { ...quoteRequest(bench), ...request, outputs: { correlations } })),
      ).toMatchObject({ status: 422, code: 'invalid_input' });
  });

  it('answers first passages asked for, in the API and in the archive, the same after an extension', async () => {
    const passages = [
      { observable: 'X', risesTo: 15 },
      { observable: 'X', risesTo: 1e6 },
    ];
    const { id } = await launched(await quoted({ replicates: 500, seed: '11', outputs: { passages } }));
    await whenOver(id);
    const first = passagesDocument.parse(await (await get(`jobs/${id}/passages`)).json());
    expect(first).toMatchObject({
      replicates: 500,
      passages: [{ direction: 'rises_to', threshold: 15 }, { passed: 0 }],
    });
    // Immigration-death, 20 in and 1 out a head, is Poisson(20 (1 − e^−t)): by time 10 nearly all have been at 15.
    expect(first.passages[0]!.passed).toBeGreaterThan(480);
    expect(first.passages[1]!.mean).toBeNull();
    expect(first.passages[1]!.quantiles['0.5']!.value).toBeNull();
    const files = unzipSync(new Uint8Array(await (await get(`jobs/${id}/archive`)).arrayBuffer()));
    const rows = (name: string): string[] => Buffer.from(files[name]!).toString('utf8').trim().split('\n');
    expect(rows('results/first-passage.csv')).toHaveLength(3);
    expect(rows('results/passage-times.csv')).toHaveLength(1 + 2 * 500);

    const { job } = (await (await get(`jobs/${id}`)).json()) as { job: JobDocument };
    const more = await quoted({ replicates: 300, seed: job.seed, outputs: { passages } });
    expect(
      (await post(`jobs/${id}/extend`, { quoteId: more.id, capMicrocredits: 2 * more.microcredits.high })).status,
    ).toBe(200);
    await whenOver(id);
    const extended = passagesDocument.parse(await (await get(`jobs/${id}/passages`)).json());
    const { id: whole } = await launched(await quoted({ replicates: 800, seed: '11', outputs: { passages } }));
    await whenOver(whole);
    expect(extended).toEqual(passagesDocument.parse(await (await get(`jobs/${whole}/passages`)).json()));
    const of = async (job: string) => ((await (await get(`jobs/${job}`)).json()) as { job: JobDocument }).job;
    expect((await of(id)).resultsDigest).toBe((await of(whole)).resultsDigest);
  });

  it('refuses first passages of what the model does not have', async () => {
    const refused = await problem(
      await post('quotes', { ...quoteRequest(bench), outputs: { passages: [{ observable: 'Nobody', fallsTo: 0 }] } }),
    );
    expect(refused).toMatchObject({ code: 'invalid_input', errors: [{ path: 'outputs.passages[0].observable' }] });
  });

  it('stops by precision at the first look that is precise enough, and says so; charges that prefix alone', async () => {
    // Poisson(20): the mean is known to ±3 % (0.6) at 1.96 √(20/n), so from n = 213 on: the look at 256 will do.
    const stopping = { kind: 'precision', observable: 'X', time: 10, relative: 0.03 };
    const { id } = await launched(await quoted({ replicates: 5_000, stopping, seed: '3' }));
    await whenOver(id);
    const { job } = (await (await get(`jobs/${id}`)).json()) as { job: JobDocument };
    expect(job).toMatchObject({
      state: 'done',
      stopReason: 'precision_reached',
      precisionReached: true,
      replicatesDone: 256,
      heldMicrocredits: 0,
      stopping,
    });
    const { id: fixed } = await launched(await quoted({ replicates: 256, seed: '3' }));
    await whenOver(fixed);
    const { job: same } = (await (await get(`jobs/${fixed}`)).json()) as { job: JobDocument };
    expect(same).toMatchObject({ resultsDigest: job.resultsDigest, events: job.events, precisionReached: null });
    expect(same.chargedMicrocredits).toBe(job.chargedMicrocredits);
  });

  it('goes to the planned replicates where the precision is not reached', async () => {
    const stopping = { kind: 'precision', observable: 'X', time: 10, absolute: 0.01 };
    const { id } = await launched(await quoted({ replicates: 600, stopping }));
    await whenOver(id);
    const { job } = (await (await get(`jobs/${id}`)).json()) as { job: JobDocument };
    expect(job).toMatchObject({ stopReason: 'replicates_reached', precisionReached: false, replicatesDone: 600 });
  });

  it('never stops at a prefix without a spread: X is 0 at time 0 in every replicate', async () => {
    const stopping = { kind: 'precision', observable: 'X', time: 0, absolute: 5 };
    const { id } = await launched(await quoted({ replicates: 600, stopping }));
    await whenOver(id);
    const { job } = (await (await get(`jobs/${id}`)).json()) as { job: JobDocument };
    expect(job).toMatchObject({ precisionReached: false, replicatesDone: 600 });
  });

  it('streams progress as events that end with the job', async () => {
    const { id } = await launched(await quoted({ replicates: 3_000 }));
    const response = await get(`jobs/${id}/progress`);
    expect(response.headers.get('content-type')).toBe('text/event-stream');
    const events = (await response.text())
      .split('\n\n')
      .filter((event) => event.startsWith('event: job'))
      .map((event) => JSON.parse(event.split('\ndata: ')[1]!) as JobDocument);
    expect(events.at(-1)).toMatchObject({ id, state: 'done', replicatesDone: 3_000 });
    const done = events.map(({ replicatesDone }) => replicatesDone);
    expect(done).toEqual([...done].sort((a, b) => a - b));
  });

  it('lets a reader of progress leave early', async () => {
    const { id } = await launched(await quoted());
    const response = await get(`jobs/${id}/progress`);
    await response.body!.cancel();
    await whenOver(id);
  });

  it('lists what the archive holds, with sizes that are those of the files', async () => {
    const { id } = await launched(await quoted());
    await whenOver(id);
    const { sha256, files } = archiveFiles.parse(await (await get(`jobs/${id}/archive/files`)).json());
    const archive = await get(`jobs/${id}/archive`);
    expect(archive.headers.get('etag')).toBe(`"${sha256}"`);
    const unpacked = unzipSync(new Uint8Array(await archive.arrayBuffer()));
    expect(Object.fromEntries(files.map(({ path, bytes }) => [path, bytes]))).toEqual(
      Object.fromEntries(Object.entries(unpacked).map(([path, bytes]) => [path, bytes.length])),
    );
  });

  it('serves the archive whole, in ranges, and not at all to whoever has it', async () => {
    const { id } = await launched(await quoted());
    await whenOver(id);
    const whole = await get(`jobs/${id}/archive`);
    const bytes = new Uint8Array(await whole.arrayBuffer());
    const etag = whole.headers.get('etag')!;
    expect(etag).toBe(`"${createHash('sha256').update(bytes).digest('hex')}"`);
    expect(Number(whole.headers.get('content-length'))).toBe(bytes.byteLength);
    expect(Object.keys(unzipSync(bytes))).toContain('results/summary.csv');

    const part = await get(`jobs/${id}/archive`, { Range: 'bytes=100-199', 'If-Range': etag });
    expect(part.status).toBe(206);
    expect(part.headers.get('content-range')).toBe(`bytes 100-199/${bytes.byteLength}`);
    expect(new Uint8Array(await part.arrayBuffer())).toEqual(bytes.slice(100, 200));
    const outdated = await get(`jobs/${id}/archive`, { Range: 'bytes=100-199', 'If-Range': '"other"' });
    expect(outdated.status).toBe(200);
    await outdated.body!.cancel();
    expect((await get(`jobs/${id}/archive`, { Range: `bytes=${bytes.byteLength}-` })).status).toBe(416);
    expect((await get(`jobs/${id}/archive`, { 'If-None-Match': etag })).status).toBe(304);
  });

  it('answers the same quote and the same job for the same idempotency key, and refuses the key for another body', async () => {
    const key = { 'Idempotency-Key': 'quote-1' };
    const request = quoteRequest(bench);
    const [first, again] = [await post('quotes', request, key), await post('quotes', request, key)];
    const { quote } = (await first.json()) as { quote: QuoteDocument };
    expect(((await again.json()) as { quote: QuoteDocument }).quote.id).toBe(quote.id);
    const other = await problem(await post('quotes', { ...request, replicates: 9 }, key));
    expect(other).toMatchObject({ status: 409, code: 'idempotency_key_reused' });

    const launchKey = { 'Idempotency-Key': 'launch-1' };
    const body = { quoteId: quote.id, name: 'Once' };
    const jobs = [await post('jobs', body, launchKey), await post('jobs', body, launchKey)];
    const ids = await Promise.all(jobs.map(async (job) => ((await job.json()) as { job: JobDocument }).job.id));
    expect(ids[0]).toBe(ids[1]);
  });

  it('quotes equal inputs from one pilot, and draws a seed where none is given', async () => {
    const { seed: _, ...request } = quoteRequest(bench, { horizon: 3 });
    const quotes = [];
    for (let i = 0; i < 2; i++)
      quotes.push(((await (await post('quotes', request)).json()) as { quote: QuoteDocument }).quote);
    expect(quotes.map(({ pilot }) => pilot.cached)).toEqual([false, true]);
    expect(quotes[0]!.eventsPerReplicate).toEqual(quotes[1]!.eventsPerReplicate);
    expect(quotes[0]!.seed).toMatch(/^\d{1,20}$/);
    expect(quotes[0]!.seed).not.toBe(quotes[1]!.seed);
  });
});

describe('bad input to a quote', () => {
  it.each([
    ['no replicates', { replicates: 0 }, 'replicates'],
    ['a negative number of replicates', { replicates: -1 }, 'replicates'],
    ['more replicates than the limit', { replicates: 1e12 }, 'replicates'],
    ['NaN, which JSON writes as null', { replicates: Number.NaN }, 'replicates'],
    ['NaN as a word', { replicates: 'NaN' }, 'replicates'],
    ['half a replicate', { replicates: 1.5 }, 'replicates'],
    ['a horizon of 0', { horizon: 0 }, 'horizon'],
    ['a negative horizon', { horizon: -1 }, 'horizon'],
    ['an endless horizon', { horizon: 1e300 }, 'horizon'],
    ['no grid', { gridIntervals: 0 }, 'gridIntervals'],
    ['a grid beyond the limit', { gridIntervals: limits.gridIntervals + 1 }, 'gridIntervals'],
    ['a lane that is none', { lane: 'fast' }, 'lane'],
    ['a method that is none', { method: 'guess' }, 'method'],
    ['an ε of the exact method', { epsilon: 0.03 }, 'epsilon'],
    ['an ε of 0', { method: 'leap', epsilon: 0 }, 'epsilon'],
    ['an ε above a half', { method: 'leap', epsilon: 0.6 }, 'epsilon'],
    ['a sweep, which is not there yet', { sweep: { parameter: 'birth', values: [1, 2] } }, 'sweep'],
    ['a stopping rule without a target', { stopping: { kind: 'precision' } }, 'stopping'],
    [
      'a precision at no grid time',
      { stopping: { kind: 'precision', observable: 'X', time: 0.123, relative: 0.1 } },
      'stopping.time',
    ],
    [
      'a precision of nothing',
      { stopping: { kind: 'precision', observable: 'Nobody', time: 10, relative: 0.1 } },
      'stopping.observable',
    ],
    ['an unknown parameter', { overrides: { parameters: { brith: 3 } } }, 'overrides.parameters.brith'],
    ['an unknown species', { overrides: { initialCounts: { Y: 3 } } }, 'overrides.initialCounts.Y'],
    ['a negative count', { overrides: { initialCounts: { X: -3 } } }, 'overrides.initialCounts.X'],
    ['half a molecule', { overrides: { initialCounts: { X: 0.5 } } }, 'overrides.initialCounts.X'],
    ['a seed beyond 2^64', { seed: '18446744073709551616' }, 'seed'],
    ['a negative seed', { seed: -1 }, 'seed'],
    [
      'more whole traces than can be kept',
      { replicates: 1_000, gridIntervals: 10_000, outputs: { keptTraces: 1_000 } },
      'outputs.keptTraces',
    ],
    ['a field that is none', { replicate: 3 }, ''],
  ])('refuses %s and names the field', async (_, more, path) => {
    const refused = await problem(await post('quotes', { ...quoteRequest(bench), ...more }));
    expect(refused).toMatchObject({ status: 422, code: 'invalid_input' });
    expect(refused.errors!.map((error) => error.path)).toContain(path);
  });

  it('refuses a negative rate constant with the cell where it stands', async () => {
    const refused = await problem(
      await post('quotes', { ...quoteRequest(bench), overrides: { parameters: { birth: -1 } } }),
    );
    expect(refused.status).toBe(422);
    expect(refused.errors!.length).toBeGreaterThan(0);
  });

  it('refuses a body that is no JSON, and one that is too large', async () => {
    const send = (body: string) =>
      callEndpoint({
        method: 'POST',
        path: `/api/v1/teams/${bench.team.slug}/quotes`,
        headers: { ...headers, 'Content-Type': 'application/json' },
        body,
      });
    expect((await problem(await send('{"replicates": NaN}'))).code).toBe('invalid_input');
    expect((await problem(await send(`"${'x'.repeat(limits.bodyBytes)}"`))).status).toBe(413);
  });

  it('says when a law goes negative at run time, with reaction, time and state, and charges nothing', async () => {
    const network = {
      species: [{ id: 'X', initialCount: 50 }],
      parameters: [],
      reactions: [
        { id: 'decay', equation: 'X → ∅', rateLaw: { kind: 'massAction' as const, constant: '1' } },
        { id: 'odd', equation: 'X → X + X', rateLaw: { kind: 'expression' as const, expression: 'X - 20' } },
      ],
    };
    const odd = await makeBench({ network });
    const oddHeaders = await bearerHeaders({ user: odd.people.modeller, team: odd.team });
    const refused = await problem(
      await callEndpoint({
        method: 'POST',
        path: `/api/v1/teams/${odd.team.slug}/quotes`,
        headers: oddHeaders,
        body: quoteRequest(odd, { horizon: 50 }),
      }),
    );
    expect(refused).toMatchObject({ status: 422, code: 'pilot_failed' });
    expect(refused.errors).toMatchObject([{ path: 'reactions.odd', code: 'negative_propensity' }]);
    expect(refused.errors![0]!.message).toContain('X = 19');
  });

  it('says that no price can be given when not one replicate ends within the pilot’s events', async () => {
    const refused = await problem(
      await post('quotes', { ...quoteRequest(bench), horizon: 1_000_000, overrides: { parameters: { birth: 1_000 } } }),
    );
    expect(refused).toMatchObject({ status: 422, code: 'pilot_failed' });
  });

  it('stops a member who runs more pilots than an hour allows, with Retry-After', async () => {
    const keen = await makeBench();
    const keenHeaders = await bearerHeaders({ user: keen.people.owner, team: keen.team });
    await inWriteTransaction(async () => {
      for (let i = 0; i < limits.pilotsPerMemberAndHour; i++)
        await PilotRun.create({ id: newId('pilot'), userId: keen.people.owner.id, createdAt: nowText() });
    });
    const response = await callEndpoint({
      method: 'POST',
      path: `/api/v1/teams/${keen.team.slug}/quotes`,
      headers: keenHeaders,
      body: quoteRequest(keen),
    });
    expect(response.status).toBe(429);
    expect(Number(response.headers.get('retry-after'))).toBeGreaterThan(0);
  });
});

describe('bad input to a job', () => {
  it.each([
    ['an unknown state', 'jobs?state=sleeping'],
    ['a page of none', 'jobs?limit=0'],
    ['a point that is none', 'jobs/{job}/statistics?point=1'],
    ['an unknown observable', 'jobs/{job}/distribution?observable=Y&time=1'],
    ['a time past the horizon', 'jobs/{job}/distribution?observable=X&time=11'],
    ['no time', 'jobs/{job}/distribution?observable=X'],
    ['a strip of no cells', 'jobs/{job}/batches?cells=0'],
  ])('refuses %s', async (_, route) => {
    const { id } = await launched(await quoted());
    await whenOver(id);
    expect(await problem(await get(route.replace('{job}', id)))).toMatchObject({ status: 422, code: 'invalid_input' });
  });

  it('refuses a job without a name, without a quote, and with a cap that is no whole number', async () => {
    const { id: quoteId } = await quoted();
    for (const body of [
      { quoteId },
      { quoteId, name: ' ' },
      { name: 'A' },
      { quoteId, name: 'A', capMicrocredits: 0.5 },
    ])
      expect((await post('jobs', body)).status).toBe(422);
    expect((await post('jobs', { quoteId: 'quote_0', name: 'A' })).status).toBe(404);
  });
});

describe('another team', () => {
  it('finds nothing of this one, under any endpoint of quotes and jobs', async () => {
    const { id: quote } = await quoted();
    const { id: job } = await launched(await quoted());
    await whenOver(job);
    const other = await makeBench();
    const theirs = await bearerHeaders({ user: other.people.owner, team: other.team });
    const bodies: Record<string, unknown> = {
      createQuote: quoteRequest(bench),
      launchJob: { quoteId: quote, name: 'Theirs' },
      cancelJob: {},
      extendJob: { quoteId: quote },
    };
    const jobsAndArchives = contracts.filter(({ feature }) => feature === 'jobs' || feature === 'archives');
    for (const { id, method, path } of jobsAndArchives) {
      if (id === 'listJobs') continue;
      const filled = path.replace('{team}', other.team.slug).replace('{quote}', quote).replace('{job}', job);
      const query = id === 'jobDistribution' ? '?observable=X&time=1' : '';
      const response = await callEndpoint({ method, path: filled + query, headers: theirs, body: bodies[id] });
      expect([id, response.status]).toEqual([id, 404]);
    }
    const list = (await (
      await callEndpoint({ path: `/api/v1/teams/${other.team.slug}/jobs`, headers: theirs })
    ).json()) as { jobs: unknown[] };
    expect(list.jobs).toEqual([]);
  });
});
