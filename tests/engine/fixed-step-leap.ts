/**
 * Explicit tau-leaping with a fixed step, for tests only: it has closed forms for linear networks, which the adaptive method has not.
 * It shares propensities and Poisson numbers with the engine, and nothing else.
 */
import type { ResolvedNetwork } from '@/domain/network/resolved.ts';
import { stateValues } from '@/engine/exact/changes.ts';
import { evaluatePropensity } from '@/engine/kernel/evaluate.ts';
import { constantValues, prepareNetwork } from '@/engine/kernel/prepare-network.ts';
import { poisson } from '@/engine/leaping/poisson.ts';
import { splitMix64 } from '@/engine/random/splitmix64.ts';
import { uniform52, Xoshiro256 } from '@/engine/random/xoshiro256.ts';

/** The counts after so many steps of length `tau`, from one generator that goes on from replicate to replicate. */
export function fixedStepLeaps(
  model: ResolvedNetwork,
  options: { tau: number; steps: number; replicates: number; seed: bigint },
): number[][] {
  const prepared = prepareNetwork(model);
  const constants = constantValues(prepared, model);
  const generator = new Xoshiro256(splitMix64(options.seed, 4));
  const uniform = (): number => uniform52(generator.next());
  return Array.from({ length: options.replicates }, () => {
    const counts = model.species.map(({ initialCount }) => initialCount);
    for (let step = 0; step < options.steps; step++) {
      const state = stateValues(prepared, constants, counts);
      const means = prepared.reactions.map((reaction) => evaluatePropensity(reaction, state) * options.tau);
      for (const [j, { changes }] of prepared.reactions.entries()) {
        const firings = means[j]! > 0 ? poisson(means[j]!, uniform) : 0;
        for (const { species, count } of changes) counts[species]! += count * firings;
      }
    }
    return counts;
  });
}
