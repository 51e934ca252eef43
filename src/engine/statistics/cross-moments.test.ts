/** Covariance and correlation against hand-worked, published and repeated numbers. */
import { describe, expect, it } from 'vitest';
import { runBatch } from '../run-batch.ts';
import { resolveNetwork } from '@/domain/network/resolve-network.ts';
import type { NetworkDocument } from '@/domain/network/document.ts';
import { crossMomentsAt } from './cross-statistics.ts';
import { decodeSummary, Summary } from './summary.ts';
import { asSummary } from './statistics-of.ts';

const shape = {
  observables: [
    { id: 'X', kind: 'count' as const },
    { id: 'Y', kind: 'count' as const },
  ],
  gridPoints: 1,
  pairs: [[0, 1]] as [number, number][],
};

function summaryOf(x: number[], y: number[]): Summary {
  const summary = new Summary(shape);
  const counts = Int32Array.from([...x, ...y]);
  const { length } = x;
  summary.add({
    replicates: length,
    stride: length,
    counts,
    reals: new Float64Array(0),
    events: new Float64Array(length),
  });
  return summary;
}

/** The last grid point of the pair 0. */
async function ran(document: NetworkDocument, options: { seed: string; replicates: number; horizon: number }) {
  const resolved = resolveNetwork(document, {});
  if (!resolved.ok) throw new Error(JSON.stringify(resolved.problems));
  const result = await runBatch({
    network: resolved.network,
    horizon: options.horizon,
    gridIntervals: 1,
    seed: options.seed,
    purpose: 'job',
    point: 0,
    firstReplicate: 0,
    replicateCount: options.replicates,
    keptTraces: 0,
    pairs: [[0, 1]],
    eventBudgetPerReplicate: null,
    eventBudgetPerBatch: null,
  });
  return { summary: asSummary(result.summary), ...crossMomentsAt(asSummary(result.summary), 0, 1) };
}

const mass = (constant: string) => ({ kind: 'massAction' as const, constant });
const isomerisation: NetworkDocument = {
  species: [
    { id: 'A', initialCount: 40 },
    { id: 'B', initialCount: 0 },
  ],
  reactions: [
    { id: 'there', equation: 'A -> B', rateLaw: mass('1') },
    { id: 'back', equation: 'B -> A', rateLaw: mass('2') },
  ],
};
const independent: NetworkDocument = {
  species: [
    { id: 'A', initialCount: 0 },
    { id: 'B', initialCount: 0 },
  ],
  reactions: [
    { id: 'makeA', equation: '∅ -> A', rateLaw: mass('10') },
    { id: 'loseA', equation: 'A -> ∅', rateLaw: mass('1') },
    { id: 'makeB', equation: '∅ -> B', rateLaw: mass('5') },
    { id: 'loseB', equation: 'B -> ∅', rateLaw: mass('1') },
  ],
};
const twoStage: NetworkDocument = {
  species: [
    { id: 'R', initialCount: 0 },
    { id: 'P', initialCount: 0 },
  ],
  reactions: [
    { id: 'transcribe', equation: '∅ -> R', rateLaw: mass('0.5') },
    { id: 'loseR', equation: 'R -> ∅', rateLaw: mass('0.5') },
    { id: 'translate', equation: 'R -> R + P', rateLaw: mass('1') },
    { id: 'loseP', equation: 'P -> ∅', rateLaw: mass('0.1') },
  ],
};

describe('covariance and correlation', () => {
  it('of (1, 2), (2, 4), (3, 3), (4, 7) are 7/3 and 7/√70, the covariance with error √3.75/2 (worked by hand)', () => {
    // Deviations x −1.5 −0.5 0.5 1.5, y −2 0 −1 3; products 3, 0, −0.5, 4.5: sum 7, mean 1.75, mean square 7.375.
    const moments = crossMomentsAt(summaryOf([1, 2, 3, 4], [2, 4, 3, 7]), 0, 0);
    expect(moments.covariance).toBeCloseTo(7 / 3, 12);
    expect(moments.covarianceStandardError).toBeCloseTo(Math.sqrt((7.375 - 1.75 ** 2) / 4), 12);
    expect(moments.correlation).toBeCloseTo(7 / Math.sqrt(5 * 14), 12);
    // By the influence function (u v − r (u² + v²) / 2) of standardised u and v, whose mean square over n is the error squared.
    const u = [-1.5, -0.5, 0.5, 1.5].map((d) => d / Math.sqrt(1.25));
    const v = [-2, 0, -1, 3].map((d) => d / Math.sqrt(3.5));
    const r = 7 / Math.sqrt(70);
    const squares = u.map((a, i) => (a * v[i]! - (r * (a * a + v[i]! ** 2)) / 2) ** 2);
    expect(moments.correlationStandardError).toBeCloseTo(Math.sqrt(squares.reduce((s, q) => s + q, 0) / 16), 12);
  });

  it('are the same for any grouping and for large counts, and read back from bytes', () => {
    const x = [1, 2e9, 3, 70_000, 5];
    const y = [2e9, 4, 3, 60_000, 9];
    const whole = summaryOf(x, y);
    const parts = summaryOf(x.slice(3), y.slice(3));
    parts.merge(summaryOf(x.slice(0, 3), y.slice(0, 3)));
    expect(parts.encode()).toEqual(whole.encode());
    expect(decodeSummary(whole.encode()).encode()).toEqual(whole.encode());
    const exact = x.reduce((sum, value, i) => sum + BigInt(value) * BigInt(y[i]!) ** 3n, 0n);
    expect(whole.cross.sums(0)[5]).toBe(exact);
  });

  it('of an observable that does not vary: covariance 0, no correlation', () => {
    const moments = crossMomentsAt(summaryOf([4, 4, 4], [1, 2, 3]), 0, 0);
    expect(moments).toMatchObject({ covariance: 0, covarianceStandardError: 0, correlation: NaN });
  });

  it('of A ⇌ B are exactly minus the variance and −1, since A + B is kept', async () => {
    const { summary, covariance, correlation, correlationStandardError } = await ran(isomerisation, {
      seed: '3',
      replicates: 1_000,
      horizon: 2,
    });
    const [s1, s2] = summary.counts.sums(summary.cell(0, 1).cell);
    expect(covariance).toBeCloseTo(-Number(1000n * s2 - s1 * s1) / 999_000, 9);
    expect([correlation, correlationStandardError]).toEqual([-1, 0]);
  });

  // z = 4: false-alarm rate 6e-5 a check.
  it('of independent Poisson species are 0 within four errors', async () => {
    const found = await ran(independent, { seed: '5', replicates: 20_000, horizon: 10 });
    expect(Math.abs(found.covariance)).toBeLessThan(4 * found.covarianceStandardError);
    expect(Math.abs(found.correlation)).toBeLessThan(4 * found.correlationStandardError);
    // Of independent values the error of r is 1/√n (Fisher 1915).
    expect(found.correlationStandardError * Math.sqrt(20_000)).toBeCloseTo(1, 1);
  });

  it('of two-stage expression: covariance 1.66666667 (Thattai & van Oudenaarden 2001), within four errors', async () => {
    const found = await ran(twoStage, { seed: '8', replicates: 20_000, horizon: 100 });
    expect(Math.abs(found.covariance - 5 / 3)).toBeLessThan(4 * found.covarianceStandardError);
  });

  it('have errors as large as the spread of 200 repetitions', async () => {
    const runs = [];
    for (let seed = 0; seed < 200; seed++)
      runs.push(await ran(twoStage, { seed: String(seed), replicates: 400, horizon: 20 }));
    // An sd of 200 runs is known to 5 %; 20 % is four times that (false-alarm rate 6e-5 a check, from memory).
    for (const name of ['covariance', 'correlation'] as const) {
      const values = runs.map((run) => run[name]);
      const mean = values.reduce((sum, value) => sum + value, 0) / 200;
      const sd = Math.sqrt(values.reduce((sum, value) => sum + (value - mean) ** 2, 0) / 199);
      const stated = runs.reduce((sum, run) => sum + run[`${name}StandardError`], 0) / 200;
      expect([name, Math.abs(sd / stated - 1) < 0.2]).toEqual([name, true]);
    }
  });
});
