/** The figure of the front page: an outbreak on a small ward, computed by the engine that customers buy. */
import type { NetworkDocument } from '@/domain/network/document.ts';
import { resolveNetwork } from '@/domain/network/resolve-network.ts';
import { gridTimes } from '@/engine/exact/direct-method.ts';
import { meanField } from '@/engine/meanfield/mean-field.ts';
import { runBatch } from '@/engine/run-batch.ts';
import { distributionOf } from '@/engine/statistics/distribution-of.ts';
import { statisticsOf } from '@/engine/statistics/statistics-of.ts';

export interface WardFigure {
  replicates: number;
  seed: string;
  days: number[];
  /** Infectious people. */
  mean: number[];
  low: number[];
  high: number[];
  traces: number[][];
  meanField: number[];
  /** Of the replicates, how many infected at most three more people. */
  smallOutbreaks: number;
}

const replicates = 20_000;
const seed = '2612010001';
const horizonDays = 60;
const gridIntervals = 60;
const gridPoints = gridIntervals + 1;
const tracesShown = 9;
const initiallyInfectious = 2;

const rounded = (values: ArrayLike<number>): number[] => Array.from(values, (value) => Number(value.toFixed(3)));

/** `document` is the demo's ward: species S, I, R. Deterministic. */
export async function computeWardFigure(document: NetworkDocument): Promise<WardFigure> {
  const resolved = resolveNetwork(document);
  if (!resolved.ok) throw new Error('The ward of the front page does not resolve.');
  const result = await runBatch({
    network: resolved.network,
    horizon: horizonDays,
    gridIntervals,
    seed,
    purpose: 'preview',
    point: 0,
    firstReplicate: 0,
    replicateCount: replicates,
    keptTraces: tracesShown,
    eventBudgetPerReplicate: null,
    eventBudgetPerBatch: null,
  });
  const times = gridTimes(horizonDays, gridIntervals);
  const statistics = statisticsOf(result.summary, times);
  const infectious = statistics.observables.find(({ id }) => id === 'I')!;
  const at = result.summary.observables.indexOf('I');
  const { values, counts } = distributionOf(result.summary, 'R', gridIntervals);
  const small = values.reduce((sum, value, index) => sum + (value <= initiallyInfectious + 3 ? counts[index]! : 0), 0);
  const rate = await meanField({ network: resolved.network, horizon: horizonDays, gridIntervals });
  if (!rate.ok) throw new Error(rate.message);
  return {
    replicates,
    seed,
    days: Array.from(times),
    mean: rounded(infectious.mean),
    low: rounded(infectious.quantiles['0.05']!),
    high: rounded(infectious.quantiles['0.95']!),
    traces: result.traces.map(({ values: trace }) =>
      Array.from(trace.subarray(at * gridPoints, (at + 1) * gridPoints)),
    ),
    meanField: rounded(rate.observables.find(({ id }) => id === 'I')!.values),
    smallOutbreaks: small,
  };
}
