/**
 * How far the reactions that leap may go before propensities have changed by more than ε of themselves.
 *
 * Source: Cao, Gillespie & Petzold, "Efficient step size selection for the tau-leaping simulation method" (J. Chem. Phys. 124,
 * 044109, 2006; citation from memory). The change of species i over τ has mean μ_i τ and variance σ²_i τ with μ_i = Σ v_ij a_j and
 * σ²_i = Σ v_ij² a_j over the reactions that leap; mean and standard deviation are kept within max(ε x_i / g_i, 1), a change of 1
 * being the least there is: τ' = min over i of max(ε x_i / g_i, 1) / |μ_i| and max(ε x_i / g_i, 1)² / σ²_i.
 *
 * Order of operations: sums over reactions in order, starting from 0, each term v · a or (v · v) · a; sums first of all propensities
 * that leap (their sum B) and of the critical ones. τ' begins as 2^50 / B; then species by species, |μ| before σ². g is the
 * largest over the forms of reaction-orders.ts, by ascending number of molecules k: the order n where k is 1, else (n / k) times
 * (1 + x / (x − 1) + … ), from the left.
 */
import type { PreparedNetwork } from '../kernel/prepared-network.ts';
import { canLeap, isCritical } from './critical-reactions.ts';
import type { BoundedSpecies, OrderForm } from './reaction-orders.ts';
import { mostFiringsOfLeap } from './tau-leaping.ts';

export interface StepSelection {
  /** Propensities of the reactions that leap, 0 for the others. */
  leaping: number[];
  leapingTotal: number;
  /** Propensities of the critical reactions, 0 for the others. */
  critical: number[];
  criticalTotal: number;
  /** τ'; infinite where no reaction leaps. */
  length: number;
}

export function selectStep(
  prepared: PreparedNetwork,
  bounded: readonly BoundedSpecies[],
  counts: ArrayLike<number>,
  propensities: readonly number[],
  epsilon: number,
): StepSelection {
  const { reactions } = prepared;
  const critical = reactions.map((reaction, j) => (isCritical(reaction, counts) ? propensities[j]! : 0));
  const leaping = reactions.map((reaction, j) =>
    canLeap(reaction) && !isCritical(reaction, counts) ? propensities[j]! : 0,
  );
  const sum = (values: readonly number[]): number => values.reduce((a, b) => a + b, 0);
  const leapingTotal = sum(leaping);
  let length = mostFiringsOfLeap / leapingTotal;
  for (const { species, forms } of bounded) {
    let mean = 0;
    let variance = 0;
    for (const [j, { changes }] of reactions.entries()) {
      const change = changes.find((one) => one.species === species);
      if (!change) continue;
      mean += change.count * leaping[j]!;
      variance += change.count * change.count * leaping[j]!;
    }
    const count = counts[species]!;
    const allowed = Math.max((epsilon * count) / highestOrder(forms, count), 1);
    length = Math.min(length, allowed / Math.abs(mean), (allowed * allowed) / variance);
  }
  return { leaping, leapingTotal, critical, criticalTotal: sum(critical), length };
}

/** g of a species of which there are `count`; infinite where a reaction just lacks molecules. */
export function highestOrder(forms: readonly OrderForm[], count: number): number {
  let highest = 0;
  for (const { order, count: molecules } of forms) {
    let terms = 1;
    for (let i = 1; i < molecules; i++) terms += count / (count - i);
    highest = Math.max(highest, molecules === 1 ? order : (order / molecules) * terms);
  }
  return highest;
}
