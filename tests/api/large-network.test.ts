/** A network of 10,000 reactions over the real endpoints: stored, checked, quoted, run and delivered. */
import { afterAll, beforeAll, expect, it } from 'vitest';
import type { JobDocument, QuoteDocument } from '@/contracts/jobs.ts';
import type { NetworkDocument, Problem } from '@/domain/network/document.ts';
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

const members = 5_000;
const step = (id: string, from: string, to: string, constant: string) => ({
  id,
  equation: `${from} -> ${to}`,
  rateLaw: { kind: 'massAction' as const, constant },
});
/** A closed ring of 5,000 species, 20 of each: 10,000 reactions. */
const ring: NetworkDocument = {
  timeUnit: 's',
  species: Array.from({ length: members }, (_, i) => ({ id: `S${i}`, initialCount: 20 })),
  parameters: [
    { id: 'forward', value: 1 },
    { id: 'backward', value: 0.5 },
  ],
  reactions: Array.from({ length: members }, (_, i) => {
    const [here, next] = [`S${i}`, `S${(i + 1) % members}`];
    return [step(`F${i}`, here, next, 'forward'), step(`B${i}`, next, here, 'backward')];
  }).flat(),
};

it('is stored with its checks, quoted, and run by composition-rejection', async () => {
  const root = `/api/v1/teams/${bench.team.slug}`;
  const post = async <T>(route: string, body: unknown): Promise<T> => {
    const response = await callEndpoint({ method: 'POST', path: `${root}/${route}`, headers, body });
    expect(response.status, await response.clone().text()).toBe(201);
    return (await response.json()) as T;
  };
  const { version, problems } = await post<{ version: { id: string }; problems: Problem[] }>('models', {
    name: 'Ring',
    network: ring,
  });
  // Looked into only up to 2,000 reactions, and said so.
  expect(problems.map(({ code }) => code)).toEqual(['not_looked_into']);
  const { quote } = await post<{ quote: QuoteDocument }>('quotes', {
    ...quoteRequest(bench, { replicates: 50, horizon: 0.01, gridIntervals: 2 }),
    modelVersionId: version.id,
  });
  // 100,000 molecules, each leaving at 1.5 per unit of time whatever the others do: a Poisson number of events with mean 1,500.
  const { mean } = quote.eventsPerReplicate;
  expect(Math.abs(mean - 1_500) / Math.sqrt(1_500 / quote.pilot.replicates)).toBeLessThan(4);
  const { job } = await post<{ job: JobDocument }>('jobs', {
    quoteId: quote.id,
    name: 'Ring',
    capMicrocredits: 2 * quote.microcredits.high,
  });
  const over = await whenOver(job.id);
  expect(over).toMatchObject({ state: 'done', kernel: 'composition-rejection' });
});
