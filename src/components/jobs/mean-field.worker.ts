/** Solves a job's rate equations beside the page, so that the page stays quick. */
import { resolveNetwork } from '@/domain/network/resolve-network.ts';
import { meanField } from '@/engine/meanfield/mean-field.ts';
import type { MeanFieldAnswer, MeanFieldTask } from './mean-field-protocol.ts';

function solve({ network, overrides, horizon, gridIntervals }: MeanFieldTask): MeanFieldAnswer {
  const resolved = resolveNetwork(network, overrides);
  if (!resolved.ok) return { ok: false, message: resolved.problems[0]?.message ?? 'The model cannot be read.' };
  const solution = meanField({ network: resolved.network, horizon, gridIntervals });
  if (!solution.ok) return { ok: false, message: solution.message };
  return { ok: true, times: solution.times, observables: solution.observables };
}

self.onmessage = (event: MessageEvent<MeanFieldTask>): void => {
  const answer = solve(event.data);
  // In a worker the second argument of the page's postMessage does not exist; the types know only the page's.
  (self.postMessage as (message: MeanFieldAnswer) => void)(answer);
};
