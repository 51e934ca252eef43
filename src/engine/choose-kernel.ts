/** Which kernel runs a network: a fixed function of the network and the engine's version, never of the machine or the clock. */
import type { KernelName } from './ensemble.ts';
import type { PreparedNetwork } from './kernel/prepared-network.ts';

/** Up to this many reactions all propensities are worked out at every firing, in SIMD lanes. */
export const largestSimdNetwork = 64;

export function chooseKernel({ reactions }: PreparedNetwork): KernelName {
  return reactions.length <= largestSimdNetwork ? 'direct-simd' : 'direct-scalar';
}
