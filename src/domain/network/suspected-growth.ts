/** Suspects counts that grow without bound in proportion to themselves, so that a run could never end. */
import { parameterValuesAt } from './parameter-values.ts';
import { hasReactants, lawValue } from './propensity.ts';
import type { ResolvedNetwork } from './resolved.ts';

/** Counts at which the drift is compared: growth that feeds itself is at least this ratio, less a margin, faster. */
const [few, many] = [1_000, 1_000_000];
const selfFeeding = (many / few) * 0.1;

/**
 * Indices of species whose mean drift is upward and at least proportional to their own count when all of them are
 * plentiful, and that no conserved total holds down (`bounded`). Species that would fall are dropped from the set, at
 * their initial counts, until none falls. A suspicion for a warning: it neither proves growth nor excludes it.
 */
export function suspectedGrowth(network: ResolvedNetwork, bounded: ReadonlySet<number>): number[] {
  let suspects = network.species.flatMap(({ boundary }, index) => (boundary || bounded.has(index) ? [] : [index]));
  while (suspects.length > 0) {
    const [slow, fast] = [driftWith(network, suspects, few), driftWith(network, suspects, many)];
    const growing = suspects.filter(
      (species) => fast[species]! > 0 && fast[species]! >= selfFeeding * Math.max(slow[species]!, 0),
    );
    if (growing.length === suspects.length) return suspects.filter((species) => slow[species]! > 0);
    suspects = growing;
  }
  return [];
}

/** Mean change of each species per unit of time with `count` of every suspect and the initial counts of the others. */
function driftWith(network: ResolvedNetwork, suspects: number[], count: number): Float64Array {
  const counts = Float64Array.from(network.species, ({ initialCount }) => initialCount);
  for (const species of suspects) counts[species] = count;
  const parameters = parameterValuesAt(network, counts);
  const drift = new Float64Array(counts.length);
  for (const reaction of network.reactions) {
    if (!hasReactants(reaction, counts)) continue;
    const propensity = lawValue(reaction, counts, parameters);
    for (const { species, count: change } of reaction.changes) drift[species]! += propensity * change;
  }
  return drift;
}
