import { describe, expect, it } from 'vitest';
import { quoteRequest } from '@/contracts/jobs.ts';
import type { NetworkDocument } from '@/domain/network/document.ts';
import { capOf, faultsOfProblem, firstSettings, numberIn, quoteRequestOf } from './launch-settings.ts';

const network: NetworkDocument = {
  timeUnit: 'h',
  species: [{ id: 'A', initialCount: 50 }],
  parameters: [{ id: 'k', value: 0.1 }],
  reactions: [{ id: 'decay', equation: 'A → ∅', rateLaw: { kind: 'massAction', constant: 'k' } }],
};
const version = { id: 'version_1', network };
const settings = firstSettings(network);
const faultsOf = (change: Partial<typeof settings>) => {
  const read = quoteRequestOf({ ...settings, ...change }, version);
  return read.ok ? {} : read.faults;
};

describe('the settings of a launch', () => {
  it('begin with a request that the contract accepts', () => {
    const read = quoteRequestOf(settings, version);
    expect(read).toMatchObject({ ok: true, request: { replicates: 1000, horizon: 48, lane: 'steady' } });
    expect(quoteRequest.safeParse(read.ok && read.request).success).toBe(true);
  });

  it.each(['0', '-1', '1e12', 'NaN', '', '2.5'])('refuse %j replicates beside the field', (replicates) => {
    expect(faultsOf({ replicates })).toHaveProperty('replicates');
  });

  it.each(['0', '-4', 'soon', ''])('refuse the horizon %j', (horizon) => {
    expect(faultsOf({ horizon })).toHaveProperty('horizon');
  });

  it('put the fault of an override to its own cell', () => {
    const faults = faultsOf({ initialCounts: { A: '-3' }, parameters: { q: '1', k: 'fast' } });
    expect(Object.keys(faults).sort()).toEqual(['initialCounts.A', 'parameters.k', 'parameters.q']);
  });

  it('ask for tau-leaping with its ε, and for no ε otherwise', () => {
    const leap = quoteRequestOf({ ...settings, method: 'leap', epsilon: '0.05' }, version);
    expect(leap).toMatchObject({ ok: true, request: { method: 'leap', epsilon: 0.05 } });
    const exact = quoteRequestOf({ ...settings, epsilon: 'none' }, version);
    expect(exact.ok && exact.request).not.toHaveProperty('epsilon');
  });

  it.each(['0', '-0.1', '0.6', '', 'small'])('refuse the ε %j', (epsilon) => {
    expect(faultsOf({ method: 'leap', epsilon })).toHaveProperty('epsilon');
  });

  it('leave out overrides that say nothing', () => {
    const read = quoteRequestOf({ ...settings, parameters: { k: ' ' } }, version);
    expect(read.ok && read.request).not.toHaveProperty('overrides');
  });

  it('take the largest seed and refuse the next', () => {
    expect(faultsOf({ seed: '18446744073709551615' })).toEqual({});
    expect(faultsOf({ seed: '18446744073709551616' })).toHaveProperty('seed');
  });
});

it('reads numbers as people write them', () => {
  expect(['10,000', '1e4', '10 000', '0.5'].map(numberIn)).toEqual([10_000, 10_000, 10_000, 0.5]);
  expect(numberIn('1e')).toBeNaN();
});

it('reads a cap in credits to the microcredit', () => {
  expect(capOf('12.5')).toEqual({ ok: true, microcredits: 12_500_000 });
  expect(capOf(' ')).toEqual({ ok: true, microcredits: undefined });
  for (const text of ['0', '-1', 'all', '1e30']) expect(capOf(text).ok).toBe(false);
});

it("puts the server's faults to the fields of the form", () => {
  expect(
    faultsOfProblem([
      { path: 'overrides.parameters.k', message: 'x' },
      { path: 'modelVersionId', message: 'y' },
    ]),
  ).toEqual({
    'parameters.k': 'x',
    model: 'y',
  });
});
