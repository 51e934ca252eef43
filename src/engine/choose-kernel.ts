/** Which kernel runs a network: a fixed function of the network and the engine's version, never of the machine or the clock. */
import type { KernelName } from './ensemble.ts';
import { dependencyGraph } from './kernel/dependency-graph.ts';
import type { PreparedNetwork } from './kernel/prepared-network.ts';

/** Up to this many reactions all propensities are worked out at every firing, in SIMD lanes: the measured cross-over of a chain. */
export const largestSimdNetwork = 80;

/**
 * Up to this many reactions the direct method runs in single numbers where a firing alters more than an eighth of all
 * propensities: working out all in line is then cheaper than looking after groups.
 */
export const largestDenseNetwork = 1_000;

export function chooseKernel(prepared: PreparedNetwork): KernelName {
  const { length } = prepared.reactions;
  if (length <= largestSimdNetwork) return 'direct-simd';
  if (length <= largestDenseNetwork && 8 * alteredOnAverage(prepared) > length) return 'direct-scalar';
  return 'composition-rejection';
}

/** Propensities that a firing alters, on average over the reactions. */
function alteredOnAverage(prepared: PreparedNetwork): number {
  const altered = dependencyGraph(prepared).reactions.flat();
  return altered.reduce((sum, { length }) => sum + length, 0) / prepared.reactions.length;
}
