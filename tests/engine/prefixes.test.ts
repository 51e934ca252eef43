/**
 * What prefixes do to estimates: that a cap leaves means unbiased, and what a nominal interval covers when a job stops by it.
 *
 * The argument (our own, elementary): the delivered prefix is the longest whose cost fits the cap. Given that n replicates fit,
 * the first n are exchangeable, so E[mean of the prefix] = E[X₁; the first one fits] / P(the first one fits): unbiased but for
 * replicates dearer than the whole cap. All seeds are fixed; each check's false-alarm rate is below 10⁻⁵ (4.4 standard errors).
 */
import { describe, expect, it } from 'vitest';
import { firstLook, isPrecise, type PrecisionTarget } from '@/domain/jobs/precision.ts';
import { runBatch } from '@/engine/run-batch.ts';
import { batchTask } from '@tests/factories/batch-tasks.ts';
import { birthDeath, immigrationDeath, network } from '@tests/factories/networks.ts';
import { bound } from './statistical-checks.ts';

interface Replicate {
  value: number;
  cost: number;
}

/** Cuts a long sample into many jobs under the same cap; `keepCrossing` is the wrong rule, which keeps the one too many. */
function meansUnderCap(sample: Replicate[], cap: number, keepCrossing = false): number[] {
  const means: number[] = [];
  let at = 0;
  for (;;) {
    let [sum, count, spent] = [0, 0, 0];
    for (; ; at++) {
      const replicate = sample[at];
      if (!replicate) return means;
      spent += replicate.cost;
      if (spent > cap && !keepCrossing) break;
      sum += replicate.value;
      count++;
      if (spent > cap) break;
    }
    // The next job draws its own replicates; the one that did not fit belongs to none.
    at++;
    if (count > 0) means.push(sum / count);
  }
}

function z(means: number[], truth: number): number {
  const mean = means.reduce((sum, x) => sum + x, 0) / means.length;
  const variance = means.reduce((sum, x) => sum + (x - mean) ** 2, 0) / (means.length - 1);
  return (mean - truth) / Math.sqrt(variance / means.length);
}

describe('means under a cap', () => {
  it('are unbiased where dear replicates are the large ones (Yule growth, skewed: cost is growth itself)', async () => {
    const n = 400_000;
    // Yule 1925: mean 5 e^{0.3 · 4} = 16.6005846137; cost x − 5 events, plus what a replicate costs at all.
    const result = await runBatch(
      batchTask(birthDeath(0.3, 0, 5), { horizon: 4, gridIntervals: 1, replicateCount: n }),
    );
    const sample = Array.from(result.eventsPerReplicate, (events) => ({ value: 5 + events, cost: 1 + events }));
    const means = meansUnderCap(sample, 150);
    expect(means.length).toBeGreaterThan(20_000);
    expect(Math.abs(z(means, 16.6005846137))).toBeLessThan(bound);
    expect(z(meansUnderCap(sample, 150, true), 16.6005846137)).toBeGreaterThan(2 * bound);
  });

  it('are unbiased for a rare outcome that is dear', async () => {
    const n = 400_000;
    // X decays by one of two ways; with probability 0.02 into a state that goes round 60 times before it rests.
    const model = network({
      counts: { X: 1, Y: 0, Z: 0 },
      reactions: [
        { consumes: { X: 1 }, rate: 0.98 },
        { consumes: { X: 1 }, produces: { Y: 60 }, rate: 0.02 },
        { consumes: { Y: 1 }, produces: { Z: 1 }, rate: 1 },
      ],
    });
    const result = await runBatch(batchTask(model, { horizon: 1e4, gridIntervals: 1, replicateCount: n }));
    const sample = Array.from(result.eventsPerReplicate, (cost) => ({ value: cost > 1 ? 1 : 0, cost }));
    const means = meansUnderCap(sample, 150);
    expect(Math.abs(z(means, 0.02))).toBeLessThan(bound);
    expect(z(meansUnderCap(sample, 150, true), 0.02)).toBeGreaterThan(2 * bound);
  });
});

describe('the nominal interval of a job that stops by precision', () => {
  it('covers the truth about as often as it says: seen in 948 of 1,000 jobs', async () => {
    const target: PrecisionTarget = {
      kind: 'precision',
      observable: 'X',
      gridPoint: 1,
      halfWidth: { relative: 0.011 },
    };
    const jobs = 1_000;
    const most = 2048;
    const truth = 63.2120558829;
    let covered = 0;
    let reached = 0;
    for (let seed = 0; seed < jobs; seed++) {
      // Stopping times, not trajectories, are of interest: a short horizon keeps the work small. X is Poisson at any time.
      const { traces } = await runBatch(
        batchTask(immigrationDeath(truth / (1 - Math.exp(-0.1)) / 10, 0.1), {
          seed: String(seed),
          horizon: 1,
          gridIntervals: 1,
          replicateCount: most,
          keptTraces: most,
        }),
      );
      const found = stopped(
        traces.map(({ values }) => values[1]!),
        target,
      );
      reached += found.reached ? 1 : 0;
      covered += Math.abs(found.mean - truth) <= 1.959963984540054 * found.standardError ? 1 : 0;
    }
    expect(reached).toBeGreaterThan(0.95 * jobs);
    // Looking again until an interval is narrow costs a little coverage; 0.95 ± 4.4 standard errors of a share of 1,000 is ± 0.03.
    expect(covered / jobs).toBeGreaterThan(0.91);
    expect(covered / jobs).toBeLessThan(0.98);
  }, 120_000);
});

/** The first look that is precise enough, or the last. */
function stopped(values: number[], target: PrecisionTarget) {
  for (let n = firstLook; ; n *= 2) {
    const seen = values.slice(0, n);
    const mean = seen.reduce((sum, x) => sum + x, 0) / n;
    const variance = seen.reduce((sum, x) => sum + (x - mean) ** 2, 0) / (n - 1);
    const standardError = Math.sqrt(variance / n);
    const reached = isPrecise(target, { replicates: n, mean, standardError, commonest: 1 });
    if (reached || 2 * n > values.length) return { mean, standardError, reached };
  }
}
