/** Finds reactions that can never fire, whatever happens, because their reactants can never all be there. */
import type { ResolvedNetwork } from './resolved.ts';

/**
 * Indices of reactions that can never fire. Sound, not complete: a species that some reachable reaction makes, or a
 * change sets, is taken to reach any count, one that none makes to keep at most its initial count; laws are not looked into. Each round adds
 * at least one reaction, and a reaction is looked at again only when one of its reactants became available: linear.
 */
export function unreachableReactions(network: ResolvedNetwork): number[] {
  const most = network.species.map(({ initialCount }) => initialCount);
  for (const { sets } of network.changes ?? []) {
    for (const { target } of sets) if (target.kind === 'species') most[target.index] = Infinity;
  }
  const usersOf = network.species.map((): number[] => []);
  network.reactions.forEach(({ reactants }, index) =>
    reactants.forEach(({ species }) => usersOf[species]!.push(index)),
  );

  const reached = new Set<number>();
  const waiting = network.reactions.map((_, index) => index);
  for (let index = waiting.pop(); index !== undefined; index = waiting.pop()) {
    const { reactants, changes } = network.reactions[index]!;
    if (reached.has(index) || !reactants.every(({ species, count }) => most[species]! >= count)) continue;
    reached.add(index);
    for (const { species, count } of changes) {
      if (count <= 0 || most[species] === Infinity) continue;
      most[species] = Infinity;
      waiting.push(...usersOf[species]!);
    }
  }
  return network.reactions.flatMap((_, index) => (reached.has(index) ? [] : [index]));
}
