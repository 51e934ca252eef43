/**
 * Which reactions may leap. A reaction that could use up one of its reactants in few firings could overshoot it; it is critical and
 * fires once at most in a leap, at an exact time.
 *
 * Source: Cao, Gillespie & Petzold, "Avoiding negative populations in explicit Poisson tau-leaping" (J. Chem. Phys. 123, 054104,
 * 2005; citation from memory): critical is a reaction with a_j > 0 and min over the species that it lowers of ⌊x_i / |v_ij|⌋
 * below n_c = 10.
 */
import type { PreparedReaction } from '../kernel/prepared-network.ts';
import { criticalFirings } from './tau-leaping.ts';

/** The counts below which the reaction is critical, one for each species that it lowers: ⌊x / |v|⌋ < 10 is x < 10 · |v|. */
export const criticalBelow = ({ changes }: PreparedReaction): { species: number; count: number }[] =>
  changes.filter(({ count }) => count < 0).map(({ species, count }) => ({ species, count: criticalFirings * -count }));

export const isCritical = (reaction: PreparedReaction, counts: ArrayLike<number>): boolean =>
  criticalBelow(reaction).some(({ species, count }) => counts[species]! < count);

/** A reaction that changes nothing takes no part in leaps: nothing would come of its draws. */
export const canLeap = ({ changes }: PreparedReaction): boolean => changes.length > 0;
