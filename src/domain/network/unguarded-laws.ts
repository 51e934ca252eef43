/** Finds expression laws that stay positive when a reactant has run out, where the engine's guard changes what they say. */
import { parameterValuesAt } from './parameter-values.ts';
import { lawValue } from './propensity.ts';
import type { ResolvedNetwork } from './resolved.ts';

export interface UnguardedLaw {
  reaction: number;
  /** The reactant, too few of it, and the positive value of the law there. */
  species: number;
  count: number;
  value: number;
}

/** Counts tried for the other species: absent, one, a few, many. */
const trialCounts = [0, 1, 7, 1_000];

/**
 * At most one finding per reaction with an expression law: each reactant in turn is set one below what the reaction
 * takes, the others to their initial and to trial counts. It finds what shows in those states, which is enough for a
 * warning; the engine guards every reaction in any case.
 */
export function unguardedLaws(network: ResolvedNetwork): UnguardedLaw[] {
  const initial = network.species.map(({ initialCount }) => initialCount);
  const states = [initial, ...trialCounts.map((count) => initial.map(() => count))];
  return network.reactions.flatMap((_, reaction) => findingFor(network, reaction, states) ?? []);
}

function findingFor(network: ResolvedNetwork, index: number, states: number[][]): UnguardedLaw | null {
  const reaction = network.reactions[index]!;
  if (reaction.law.kind !== 'expression') return null;
  for (const { species, count } of reaction.reactants) {
    for (const state of states) {
      const counts = Float64Array.from(state);
      counts[species] = count - 1;
      const value = lawValue(reaction, counts, parameterValuesAt(network, counts));
      if (value > 0) return { reaction: index, species, count: count - 1, value };
    }
  }
  return null;
}
