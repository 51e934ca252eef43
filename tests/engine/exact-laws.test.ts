/**
 * The exact method against laws known in closed form. Citations are from memory; every value was recomputed by a second method
 * (truncated master equation, linear solve or exact fractions). False-alarm rate: statistical-checks.ts.
 */
import binomial from '@stdlib/stats-base-dists-binomial';
import poisson from '@stdlib/stats-base-dists-poisson';
import { describe, expect, it } from 'vitest';
import type { ResolvedNetwork } from '@/domain/network/resolved.ts';
import type { BatchTask } from '@/engine/ensemble.ts';
import { gridTimes } from '@/engine/exact/direct-method.ts';
import { runBatch } from '@/engine/run-batch.ts';
import { distributionOf } from '@/engine/statistics/distribution-of.ts';
import { statisticsOf } from '@/engine/statistics/statistics-of.ts';
import { batchTask } from '@tests/factories/batch-tasks.ts';
import {
  birthDeath,
  decayingDimerising,
  dimerisation,
  enzyme,
  epidemic,
  immigrationDeath,
} from '@tests/factories/networks.ts';
import { isomerisation, network, pureDeath, twoStageExpression } from '@tests/factories/networks.ts';
import { expectDistribution, expectMean, expectShare, expectVariance } from './statistical-checks.ts';

/** The ensemble at the horizon. */
async function ensemble(network: ResolvedNetwork, horizon: number, n: number, given: Partial<BatchTask> = {}) {
  const result = await runBatch(batchTask(network, { horizon, replicateCount: n, gridIntervals: 1, ...given }));
  expect(result.failure).toBeNull();
  const statistics = statisticsOf(result.summary, gridTimes(horizon, given.gridIntervals ?? 1));
  const last = statistics.times.length - 1;
  const at = (id: string) => {
    const observable = statistics.observables.find((candidate) => candidate.id === id)!;
    const distribution = distributionOf(result.summary, id, last);
    const counts = new Map(distribution.values.map((value, i) => [value, distribution.counts[i]!]));
    return { mean: observable.mean[last]!, sd: observable.sd[last]!, variance: observable.sd[last]! ** 2, counts };
  };
  return { at, events: result.eventsPerReplicate, statistics };
}

const mean = (values: Float64Array): number => values.reduce((sum, value) => sum + value, 0) / values.length;

describe('immigration-death, 10 in and 0.1 out per head (Bailey 1964 ch. 8; Gardiner, Handbook of Stochastic Methods ch. 7)', () => {
  it('from 0 is Poisson with mean 63.2120558829 at time 10', async () => {
    const n = 50_000;
    const lambda = 63.2120558829;
    const { at, events } = await ensemble(immigrationDeath(), 10, n);
    const { mean: observed, variance, counts } = at('X');
    expectMean(observed, lambda, Math.sqrt(lambda), n);
    expectVariance(variance, lambda, 3 + 1 / lambda, n);
    expectDistribution(counts, (value) => poisson.pmf(value, lambda), n);
    for (const [value, probability] of [
      [50, 0.0127137549513],
      [63, 0.050177692464],
      [75, 0.0163205529627],
    ] as const)
      expectShare(counts.get(value)!, probability, n);
    expectMean(mean(events), 136.787944117, Math.sqrt(210.363832351), n);
  });

  it('from 150 has mean 118.393972059 and variance 98.0936795731', async () => {
    const n = 20_000;
    const { at } = await ensemble(immigrationDeath(10, 0.1, 150), 10, n);
    expectMean(at('X').mean, 118.393972059, Math.sqrt(98.0936795731), n);
    expectVariance(at('X').variance, 98.0936795731, 3.02, n);
  });
});

describe('linear birth-death (Kendall 1948, Ann. Math. Stat. 19:1)', () => {
  it('with births 1, deaths 0.5, from 5: mean, variance and extinction at time 2', async () => {
    const n = 50_000;
    const { at } = await ensemble(birthDeath(1, 0.5, 5), 2, n);
    const { mean: observed, variance, counts } = at('X');
    expectMean(observed, 13.5914091423, Math.sqrt(70.0616140571), n);
    // Kurtosis of the law is below 5; the bound is widened accordingly.
    expectVariance(variance, 70.0616140571, 5, n);
    expectShare(counts.get(0) ?? 0, 0.00871441824829, n);
  });

  it('dies out in the end with probability (μ/λ)^n0 = 0.03125', async () => {
    const n = 5_000;
    const { at } = await ensemble(birthDeath(1, 0.5, 5), 12, n, { eventBudgetPerReplicate: null });
    // P(extinct by 12) from the closed form, within 5e-4 of the limit.
    const growth = Math.exp(6);
    expectShare(at('X').counts.get(0) ?? 0, ((0.5 * (growth - 1)) / (growth - 0.5)) ** 5, n);
  });

  it('critical, from 10 to time 3: variance 60 and P0 = 0.0563135147095', async () => {
    const n = 50_000;
    const { at } = await ensemble(birthDeath(1, 1, 10), 3, n);
    expectMean(at('X').mean, 10, Math.sqrt(60), n);
    expectVariance(at('X').variance, 60, 7, n);
    expectShare(at('X').counts.get(0) ?? 0, 0.0563135147095, n);
  });

  it('births alone (Yule 1925, Phil. Trans. B 213:21) are negative binomial', async () => {
    const n = 50_000;
    const { at } = await ensemble(birthDeath(0.3, 0, 5), 4, n);
    expectMean(at('X').mean, 16.6005846137, Math.sqrt(38.5152972895), n);
    expectVariance(at('X').variance, 38.5152972895, 5, n);
    expectShare(at('X').counts.get(10)!, 0.052045851862, n);
    expectShare(at('X').counts.get(15)!, 0.0689020464757, n);
  });
});

describe('pure death of 100 at 0.5 (Bailey 1964 § 8.5; Gillespie 1977, J. Phys. Chem. 81:2340)', () => {
  it('is binomial(100, e^−½) at time 1', async () => {
    const n = 50_000;
    const { at } = await ensemble(pureDeath(0.5, 100), 1, n);
    expectMean(at('X').mean, 60.6530659713, Math.sqrt(23.8651218541), n);
    expectVariance(at('X').variance, 23.8651218541, 3, n);
    expectDistribution(at('X').counts, (value) => binomial.pmf(value, 100, Math.exp(-0.5)), n);
    expectShare(at('X').counts.get(61)!, 0.0813686637714, n);
  });

  it('fires exactly 100 times in every replicate that dies out', async () => {
    const { events } = await ensemble(pureDeath(0.5, 100), 1e6, 2_000);
    expect(new Set(events)).toEqual(new Set([100]));
  });

  it('takes H₁₀₀/m = 10.3747550353 to die out on average (mean of the time at which the count is above 0)', async () => {
    // ∫ P(T > t) dt over a fine grid: the mean extinction time by the trapezoid, with an error far below the sampling error.
    const n = 20_000;
    const [horizon, gridIntervals] = [60, 1_200];
    const result = await runBatch(batchTask(pureDeath(0.5, 100), { horizon, replicateCount: n, gridIntervals }));
    let integral = 0;
    for (let point = 0; point <= gridIntervals; point++) {
      const { values, counts } = distributionOf(result.summary, 'X', point);
      const extinct = values[0] === 0 ? counts[0]! : 0;
      integral += ((n - extinct) / n) * (point === 0 || point === gridIntervals ? 0.5 : 1);
    }
    // Var T = Σ 1/(k m)² = 4 · 1.634983900 for k = 1 … 100.
    expectMean((integral * horizon) / gridIntervals, 10.3747550353, Math.sqrt(4 * 1.6349839), n);
  });
});

describe('isomerisation of 50 at 1 and 0.5 (Darvey & Staff 1966, J. Chem. Phys. 44:990)', () => {
  it('is binomial at time 1 and fires 41.9652204428 times on average', async () => {
    const n = 50_000;
    const { at, events, statistics } = await ensemble(isomerisation(1, 0.5, 50), 1, n);
    expectMean(at('B').mean, 25.8956613284, Math.sqrt(12.4839558157), n);
    expectVariance(at('B').variance, 12.4839558157, 3, n);
    expectDistribution(at('B').counts, (value) => binomial.pmf(value, 50, 25.8956613284 / 50), n);
    expectShare(at('B').counts.get(26)!, 0.112314913152, n);
    expectMean(mean(events), 41.9652204428, statistics.events.sdPerReplicate, n);
  });
});

describe('reversible dimerisation in equilibrium (McQuarrie 1967, J. Appl. Prob. 4:413)', () => {
  it('of 100 monomers: mean 36.4591723215, sd 2.39003372943, P(36) = 0.161217431471', async () => {
    const n = 10_000;
    const { at } = await ensemble(dimerisation(0.001, 0.01, 100), 400, n);
    expectMean(at('P2').mean, 36.4591723215, 2.39003372943, n);
    expectVariance(at('P2').variance, 2.39003372943 ** 2, 3, n);
    expectShare(at('P2').counts.get(36)!, 0.161217431471, n);
  });

  it('of 5 monomers: 4/39, 20/39, 15/39', async () => {
    const n = 20_000;
    const { at } = await ensemble(dimerisation(1, 2, 5), 20, n);
    [4, 20, 15].forEach((weight, dimers) => expectShare(at('P2').counts.get(dimers)!, weight / 39, n));
  });
});

describe('two-stage gene expression (Thattai & van Oudenaarden 2001, PNAS 98:8614)', () => {
  it('has mean protein 10 and Fano factor 2.66666667 in the long run, 2.62357925 on average at time 5', async () => {
    const n = 40_000;
    const { at } = await ensemble(twoStageExpression(), 100, n);
    const variance = 26.6666667;
    expectMean(at('protein').mean, 10, Math.sqrt(variance), n);
    expectVariance(at('protein').variance, variance, 4, n);
    const early = await ensemble(twoStageExpression(), 5, n);
    expectMean(early.at('protein').mean, 2.62357925, early.at('protein').sd, n);
  });

  it('has a stationary covariance of mRNA and protein of 1.66666667', async () => {
    const n = 20_000;
    const { traces } = await runBatch(
      batchTask(twoStageExpression(), { horizon: 150, replicateCount: n, gridIntervals: 1, keptTraces: n }),
    );
    // Stationary means 1 and 10, known exactly, so that the products average to the covariance itself. What is left of the start
    // at 0 is e^(−0.1 · 150), 3 in 10 million.
    const products = Float64Array.from(traces, ({ values }) => (values[1]! - 1) * (values[3]! - 10));
    const average = mean(products);
    const sd = Math.sqrt(mean(products.map((product) => (product - average) ** 2)));
    expect(products).toHaveLength(n);
    expectMean(average, 1.66666667, sd, n);
  });
});

describe('one enzyme molecule at a fixed 30 substrates (Kou et al. 2005, J. Phys. Chem. B 109:19068)', () => {
  it('waits 4.66666667 for a turnover, with variance 15.1111111', async () => {
    const n = 40_000;
    const fixed = network({
      counts: { S: 30, E: 1, ES: 0, P: 0 },
      boundary: ['S'],
      reactions: [
        { consumes: { S: 1, E: 1 }, produces: { ES: 1 }, rate: 0.02 },
        { consumes: { ES: 1 }, produces: { S: 1, E: 1 }, rate: 0.3 },
        { consumes: { ES: 1 }, produces: { E: 1, P: 1 }, rate: 0.5 },
      ],
    });
    const passages = [{ observable: 3, direction: 'rises_to' as const, threshold: 1 }];
    const { passageTimes } = await runBatch(
      batchTask(fixed, { horizon: 200, gridIntervals: 1, replicateCount: n, passages }),
    );
    const wait = mean(passageTimes);
    expectMean(wait, 4.66666667, Math.sqrt(15.1111111), n);
    // A sum of two exponentials: kurtosis 9 at most, which one exponential alone has.
    expectVariance(mean(passageTimes.map((time) => (time - wait) ** 2)), 15.1111111, 9, n);
  });
});

describe('one enzyme molecule and 30 substrates (Kou et al. 2005, J. Phys. Chem. B 109:19068)', () => {
  it('takes 96 firings on average to convert all', async () => {
    const n = 5_000;
    const { events, at, statistics } = await ensemble(enzyme(30), 1e6, n);
    expect(at('P').counts).toEqual(new Map([[30, n]]));
    expectMean(mean(events), 96, statistics.events.sdPerReplicate, n);
  });

  it('takes 379.598970474 time units on average to convert all (mean of the time at which substrate is left)', async () => {
    const n = 4_000;
    const [horizon, gridIntervals] = [3_000, 3_000];
    const result = await runBatch(batchTask(enzyme(30), { horizon, replicateCount: n, gridIntervals }));
    let [first, second] = [0, 0];
    for (let point = 0; point <= gridIntervals; point++) {
      const { values, counts } = distributionOf(result.summary, 'P', point);
      const converted = values.at(-1) === 30 ? counts.at(-1)! : 0;
      const step = horizon / gridIntervals;
      const alive = ((n - converted) / n) * (point === 0 ? 0.5 : 1) * step;
      first += alive;
      second += 2 * point * step * alive;
    }
    expectMean(first, 379.598970474, Math.sqrt(second - first * first), n);
  });
});

describe('an epidemic of 9 and 1 at β = 2, γ = 1 (Ball 1986, Adv. Appl. Prob. 18:289)', () => {
  it('has the final-size law and fires exactly 2Z + 1 times in every replicate', async () => {
    const n = 50_000;
    const result = await runBatch(
      batchTask(epidemic(9, 1, 2, 1), { horizon: 1e6, replicateCount: n, gridIntervals: 1, keptTraces: n }),
    );
    const later = result.traces.map(({ values }) => 9 - values[1]!);
    later.forEach((infections, replicate) => {
      if (result.eventsPerReplicate[replicate] !== 2 * infections + 1) throw new Error(`replicate ${replicate}`);
    });
    const share = (size: number): number => later.filter((infections) => infections === size).length;
    for (const [size, probability] of [
      [0, 5 / 14],
      [1, 225 / 2366],
      [5, 0.0450934714704],
      [9, 0.126281613458],
    ] as const)
      expectShare(share(size), probability, n);
    const average = later.reduce((sum, infections) => sum + infections, 0) / n;
    const sd = Math.sqrt(later.reduce((sum, infections) => sum + (infections - average) ** 2, 0) / n);
    expectMean(average, 3.57100448679, sd, n);
    expectMean(mean(result.eventsPerReplicate), 8.14200897357, 2 * sd, n);
  });
});

describe('event counts, the oracle of the meter', () => {
  it('of birth-death at 0.1 and 0.11 from 100 to time 50 are 826.285614603 on average', async () => {
    const n = 10_000;
    const { events, statistics } = await ensemble(birthDeath(0.1, 0.11, 100), 50, n);
    expectMean(mean(events), 826.285614603, statistics.events.sdPerReplicate, n);
  });
});

describe('the decaying-dimerising set (system: Gillespie 2001, J. Chem. Phys. 115:1716; values from 8,000 runs of a second program)', () => {
  it('has the means, standard deviations and event counts at time 10', async () => {
    const n = 150;
    const { at, events, statistics } = await ensemble(decayingDimerising(), 10, n);
    const known = [
      ['S1', 2418.36, 49.99],
      ['S2', 13958.05, 91.54],
      ['S3', 13513.28, 84.52],
    ] as const;
    // The published figures' own errors (8,000 runs) are added to ours.
    const n8000 = 1 / (1 / n + 1 / 8_000);
    for (const [id, average, sd] of known) {
      expectMean(at(id).mean, average, sd, n8000);
      expectVariance(at(id).variance, sd ** 2, 3, n8000);
    }
    expectMean(mean(events), 279041.8, statistics.events.sdPerReplicate, n8000);
  });
});
