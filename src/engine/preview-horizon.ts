/** A simulated time worth looking at, found by running one replicate, for previews of models that no job has run yet. */
import type { ResolvedNetwork } from '@/domain/network/resolved.ts';
import { largestHorizon } from './exact/direct-method.ts';
import { runBatch } from './run-batch.ts';

const firingsLeast = 1_000;
const firingsMost = 200_000;

/**
 * About the time by which one replicate has fired often enough to show its course: twice the molecules at the start,
 * from 1,000 to 200,000 firings; where it comes to rest before, a little after 95 % of its firings. Rounded to 1, 2 or
 * 5 times a power of ten; null when nothing ever fires or the model fails.
 */
export async function previewHorizon(network: ResolvedNetwork): Promise<number | null> {
  const molecules = network.species.reduce((sum, { initialCount }) => sum + initialCount, 0);
  const wished = Math.min(firingsMost, Math.max(firingsLeast, 2 * molecules));
  const whole = await timeOfFiring(network, wished);
  if (whole.kind === 'reached') return roundTime(whole.time);
  if (whole.kind === 'failed' || whole.firings === 0) return null;
  const most = await timeOfFiring(network, Math.floor(0.95 * (whole.firings - 1)));
  return most.kind === 'reached' ? roundTime(1.2 * most.time) : null;
}

type Reached = { kind: 'reached'; time: number } | { kind: 'rested'; firings: number } | { kind: 'failed' };

/** When the firing after `firings` others happens. */
async function timeOfFiring(network: ResolvedNetwork, firings: number): Promise<Reached> {
  const { failure, eventsPerReplicate } = await runBatch({
    network,
    horizon: largestHorizon,
    gridIntervals: 1,
    seed: '0',
    purpose: 'preview',
    point: 0,
    firstReplicate: 0,
    replicateCount: 1,
    keptTraces: 0,
    eventBudgetPerReplicate: firings,
    eventBudgetPerBatch: null,
  });
  if (failure === null) return { kind: 'rested', firings: eventsPerReplicate[0]! };
  return failure.kind === 'event_budget' ? { kind: 'reached', time: failure.time } : { kind: 'failed' };
}

/** The nearest of 1, 2, 5, 10 … times a power of ten, by ratio. */
export function roundTime(time: number): number {
  if (!(time > 0 && time < Infinity)) return 1;
  const power = 10 ** Math.floor(Math.log10(time));
  const steps = [1, 2, 5, 10].map((step) => step * power);
  return steps.reduce((best, step) =>
    Math.abs(Math.log(step / time)) < Math.abs(Math.log(best / time)) ? step : best,
  );
}
