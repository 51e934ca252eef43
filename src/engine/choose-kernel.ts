/** Which kernel runs a network: a fixed function of the network and the engine's version, never of the machine or the clock. */
import type { KernelName } from './ensemble.ts';
import type { PreparedNetwork } from './kernel/prepared-network.ts';

export function chooseKernel(_prepared: PreparedNetwork): KernelName {
  return 'direct-scalar';
}
