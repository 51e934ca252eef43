/** Large networks for tests and the bench. */
import type { ResolvedNetwork } from '@/domain/network/resolved.ts';
import { network, type ReactionSketch } from './networks.ts';

/**
 * A chain S0 ⇌ S1 ⇌ … with `species` members, `count` of each: 2 · species − 2 reactions when closed; open, S0 comes in and the last
 * goes out, 2 · species reactions.
 */
export function chain(options: {
  species: number;
  counts: (index: number) => number;
  forward?: number;
  backward?: number;
  open?: { arrival: number; departure: number };
}): ResolvedNetwork {
  const { species, counts, forward = 1, backward = 0.5, open } = options;
  const reactions: ReactionSketch[] = [];
  for (let i = 0; i + 1 < species; i++) {
    reactions.push({ consumes: { [`S${i}`]: 1 }, produces: { [`S${i + 1}`]: 1 }, rate: forward });
    reactions.push({ consumes: { [`S${i + 1}`]: 1 }, produces: { [`S${i}`]: 1 }, rate: backward });
  }
  if (open) {
    reactions.push({ produces: { S0: 1 }, rate: open.arrival });
    reactions.push({ consumes: { [`S${species - 1}`]: 1 }, rate: open.departure });
  }
  return network({
    counts: Object.fromEntries(Array.from({ length: species }, (_, i) => [`S${i}`, counts(i)])),
    reactions,
  });
}

/** An open chain of so many reactions in its steady state, 20 of each species. */
export const steadyChain = (reactions: number): ResolvedNetwork =>
  chain({ species: reactions / 2, counts: () => 20, open: { arrival: 10, departure: 0.5 } });
