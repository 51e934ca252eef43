/**
 * First passages and noise, from replicates to estimates, against laws known in closed form (citations from memory, values
 * recomputed). False-alarm rate: statistical-checks.ts.
 */
import { describe, expect, it } from 'vitest';
import type { ResolvedNetwork } from '@/domain/network/resolved.ts';
import type { BatchTask } from '@/engine/ensemble.ts';
import { gridTimes } from '@/engine/exact/direct-method.ts';
import { runBatch } from '@/engine/run-batch.ts';
import { passageCurve, passageEstimates } from '@/engine/statistics/first-passage.ts';
import { statisticsOf } from '@/engine/statistics/statistics-of.ts';
import { batchTask } from '@tests/factories/batch-tasks.ts';
import { birthDeath, immigrationDeath, pureDeath, twoStageExpression } from '@tests/factories/networks.ts';
import { bound, expectMean, expectShare } from './statistical-checks.ts';

async function timesOf(network: ResolvedNetwork, given: Partial<BatchTask>): Promise<Float64Array> {
  const { passageTimes, failure } = await runBatch(batchTask(network, { gridIntervals: 1, ...given }));
  expect(failure).toBeNull();
  return passageTimes;
}

describe('passageEstimates', () => {
  const times = Float64Array.of(3, Infinity, 1, 2, Infinity);

  it('counts, averages and orders by hand: 3 of 5 passed by 4; min(T, 4) averages 14/5', () => {
    const estimates = passageEstimates(times, 4);
    expect(estimates).toMatchObject({ replicates: 5, passed: 3, mean: null });
    expect(estimates.probability.value).toBe(0.6);
    // Wilson 1927: centre (0.6 + z²/10)/(1 + z²/5), by hand.
    expect(estimates.probability.lower).toBeCloseTo(0.2307, 4);
    expect(estimates.probability.upper).toBeCloseTo(0.8824, 4);
    expect(estimates.restrictedMean.value).toBeCloseTo(2.8, 12);
    expect(estimates.restrictedMean.standardError).toBeCloseTo(
      Math.sqrt((0.04 + 1.44 + 3.24 + 0.64 + 1.44) / 4 / 5),
      12,
    );
    // Type 1: rank ⌈5 · 0.5⌉ = 3; rank 4 is not reached. Five replicates bound no quantile above.
    expect(estimates.quantiles['0.5']!.value).toBe(3);
    expect(estimates.quantiles['0.75']!.value).toBe(Infinity);
    expect(estimates.quantiles['0.5']!.upper).toBe(Infinity);
  });

  it('gives a plain mean only where all passed, and never changes the times it is given', () => {
    const all = Float64Array.of(5, 1, 3);
    expect(passageEstimates(all, 10).mean).toEqual({ value: 3, standardError: Math.sqrt(4 / 3) });
    expect([...all]).toEqual([5, 1, 3]);
  });

  it('grows the share passed from the first time to the last', () => {
    expect(passageCurve(times, [0, 1, 1.5, 3, 4]).probability).toEqual([0, 0.2, 0.2, 0.6, 0.6]);
  });
});

describe('absorption is not censoring', () => {
  // Birth-death 1, 0.5 from 2: extinct in the end with probability (1/2)² = 1/4 (Kendall 1948; ultimate extinction (μ/λ)^n0),
  // so it rises to 10 first with probability (1 − (1/2)²) / (1 − (1/2)^10) (gambler's ruin, Feller vol. 1 ch. XIV, by hand).
  const truth = (1 - 0.5 ** 2) / (1 - 0.5 ** 10);

  it('a population that dies out counts as never passing: censored at its extinction, everybody would seem to pass', async () => {
    const n = 20_000;
    // Late enough for all but a negligible part to have passed or died out, early enough for growth to stay cheap.
    const horizon = 12;
    const found = await timesOf(birthDeath(1, 0.5, 2), {
      horizon,
      replicateCount: n,
      passages: [
        { observable: 0, direction: 'rises_to', threshold: 10 },
        { observable: 0, direction: 'falls_to', threshold: 0 },
      ],
    });
    const passage = found.subarray(0, n);
    const extinction = found.subarray(n);
    const { passed } = passageEstimates(passage, horizon);
    expectShare(passed, truth, n);
    // What taking absorption for censoring (Kaplan & Meier 1958, by hand) would say: near 1, and wrong.
    expect(productLimit(passage, extinction)).toBeGreaterThan(0.97);
  });
});

/** The product-limit estimate of P(passed by the end) when extinctions are taken for censoring. */
function productLimit(passage: Float64Array, censoring: Float64Array): number {
  const ends = Array.from(passage, (time, i) => ({
    time: Math.min(time, censoring[i]!),
    passed: time < censoring[i]!,
  }))
    .filter(({ time }) => time < Infinity)
    .sort((a, b) => a.time - b.time);
  let atRisk = passage.length;
  let survival = 1;
  for (const { passed } of ends) {
    if (passed) survival *= 1 - 1 / atRisk;
    atRisk--;
  }
  return 1 - survival;
}

describe('first passages of laws known in closed form', () => {
  it('immigration-death from 0 to 50: mean 6.83658932625 (birth-death chain; Karlin & Taylor 1975 ch. 4)', async () => {
    const n = 20_000;
    const passages = [{ observable: 0, direction: 'rises_to' as const, threshold: 50 }];
    const { mean } = passageEstimates(
      await timesOf(immigrationDeath(), { horizon: 60, replicateCount: n, passages }),
      60,
    );
    expectMean(mean!.value, 6.83658932625, mean!.standardError * Math.sqrt(n), n);
  });

  it('extinction of pure death by time t has probability (1 − e^−mt)^n: the curve lies within its intervals’ reach (Bailey 1964 §8.5)', async () => {
    const n = 20_000;
    const at = [4, 6, 8, 10, 12, 16];
    const passages = [{ observable: 0, direction: 'falls_to' as const, threshold: 0 }];
    const { probability } = passageCurve(
      await timesOf(pureDeath(0.5, 20), { horizon: 20, replicateCount: n, passages }),
      at,
    );
    at.forEach((time, i) => expectShare(Math.round(probability[i]! * n), (1 - Math.exp(-0.5 * time)) ** 20, n));
  });
});

describe('noise', () => {
  const atEnd = async (network: ResolvedNetwork, horizon: number, n: number, seed: string) => {
    const { summary } = await runBatch(batchTask(network, { horizon, gridIntervals: 1, replicateCount: n, seed }));
    return statisticsOf(summary, gridTimes(horizon, 1)).observables;
  };

  it('of protein in two-stage expression is Fano 1 + kP/(γR + γP) = 2.66666667 (Thattai & van Oudenaarden 2001)', async () => {
    const protein = (await atEnd(twoStageExpression(), 100, 40_000, '20261201'))[1]!;
    expect(Math.abs(protein.fano[1]! - 8 / 3) / protein.fanoStandardError[1]!).toBeLessThan(bound);
    // CV² = Fano / mean.
    expect(protein.cv[1]! ** 2).toBeCloseTo(protein.fano[1]! / protein.mean[1]!, 10);
  });

  it('of a Poisson law is Fano 1 and CV 1/√mean, and the stated errors are the spread over 200 ensembles', async () => {
    const [fanos, cvs, ofFano, ofCv]: number[][] = [[], [], [], []] as never;
    for (let seed = 0; seed < 200; seed++) {
      const x = (await atEnd(immigrationDeath(), 10, 300, String(seed)))[0]!;
      fanos!.push(x.fano[1]!);
      cvs!.push(x.cv[1]!);
      ofFano!.push(x.fanoStandardError[1]!);
      ofCv!.push(x.cvStandardError[1]!);
    }
    const mean = (values: number[]) => values.reduce((sum, x) => sum + x, 0) / values.length;
    const sd = (values: number[]) => Math.sqrt(mean(values.map((x) => (x - mean(values)) ** 2)));
    expectMean(mean(fanos!), 1, sd(fanos!), 200);
    // The ratio of a sample sd over 200 values to the truth has standard error 1/√400 = 0.05; bound 4.4 of them.
    expect(Math.abs(sd(fanos!) / mean(ofFano!) - 1)).toBeLessThan(0.05 * bound);
    expect(Math.abs(sd(cvs!) / mean(ofCv!) - 1)).toBeLessThan(0.05 * bound);
  });
});
