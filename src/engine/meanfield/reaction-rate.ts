/**
 * The rate of one reaction and its derivatives in the rate equations.
 *
 * Mass action, in the large-count limit: c·Π xᵢ^nᵢ/nᵢ! where the stochastic law is c·Π binomial(xᵢ, nᵢ). The two share c,
 * so 2A → … with c·x(x−1)/2 becomes c·x²/2 (Kurtz 1972, J. Chem. Phys. 57:2976; Gillespie 2007, Annu. Rev. Phys. Chem.
 * 58:35; citations from memory). Expression laws are kept verbatim.
 *
 * Guard: a reaction one of whose reactants is at or below 0 does not fire. Where a law has the reactant as a factor that is
 * no jump. A law that stays positive without its reactant (a constant rate of removal, say) would jump there, and the
 * solution would slide along the jump in ever smaller steps; such a law fades to 0 linearly over the last
 * `fadeCount` molecules of that reactant. The convention is our own; it moves no count by more than about `fadeCount`.
 */
import type { Expression } from '@/domain/network/expression.ts';
import type { ResolvedNetwork, Stoichiometry } from '@/domain/network/resolved.ts';
import { compileExpression, type Values } from './compile-expression.ts';
import { operationsOf, type Dependencies } from './dependencies.ts';
import { derivativeAlong, type Direction } from './directional-derivative.ts';
import { vanishesWith } from './vanishes-with.ts';

export const fadeCount = 1e-3;

export interface ReactionRate {
  /** Species (not boundary ones) that the rate depends on, ascending. */
  dependsOn: number[];
  /** Operations of one evaluation, roughly. */
  operations: number;
  /** Works out constants again after parameters have changed. */
  refresh(parameters: Float64Array): void;
  /** Firings per unit of time; counts are 0 or above. */
  rate(values: Values): number;
  /** ∂rate/∂x for each of `dependsOn`, into `slopes` from `offset`; at 0 the derivative from above. Never NaN or infinite. */
  slopes(values: Values, directionOf: (species: number) => Direction, slopes: Float64Array, offset: number): void;
}

/** c·Π xᵢ^nᵢ/nᵢ!. */
export function massActionRate(
  network: ResolvedNetwork,
  reactants: Stoichiometry[],
  constant: Expression,
): ReactionRate {
  const compiled = compileExpression(constant);
  const dependsOn = reactants.map(({ species }) => species).filter((one) => !network.species[one]!.boundary);
  dependsOn.sort((a, b) => a - b);
  let factor = 0;
  return {
    dependsOn,
    operations: reactants.reduce((sum, { count }) => sum + 4 * count, 10),
    refresh(parameters) {
      factor = compiled({ counts: new Float64Array(0), parameters });
    },
    rate({ counts }) {
      let rate = factor;
      for (const { species, count } of reactants) rate *= powerOverFactorial(counts[species]!, count);
      return rate;
    },
    slopes({ counts }, _directionOf, slopes, offset) {
      dependsOn.forEach((along, index) => {
        let slope = factor;
        for (const { species, count } of reactants) {
          slope *= powerOverFactorial(counts[species]!, species === along ? count - 1 : count);
        }
        slopes[offset + index] = finiteOrZero(slope);
      });
    },
  };
}

/** x^n/n!. */
function powerOverFactorial(x: number, n: number): number {
  let product = 1;
  for (let i = 1; i <= n; i++) product *= x / i;
  return product;
}

/** The law verbatim, with the guard above. */
export function expressionRate(
  network: ResolvedNetwork,
  reactants: Stoichiometry[],
  expression: Expression,
  dependencies: Dependencies,
): ReactionRate {
  const law = compileExpression(expression);
  const assigned = new Map(network.assignments.map(({ parameter, expression: behind }) => [parameter, behind]));
  const fading = reactants.map(({ species }) => species).filter((one) => !vanishesWith(expression, one, assigned));
  const fadingFree = fading.filter((one) => !network.species[one]!.boundary);
  const dependsOn = [...new Set([...dependencies.of(expression), ...fadingFree])].sort((a, b) => a - b);
  const fade = (counts: Float64Array, except = -1): number =>
    fading.reduce((product, one) => (one === except ? product : product * Math.min(1, counts[one]! / fadeCount)), 1);
  return {
    dependsOn,
    operations: operationsOf(expression) + 2 * reactants.length,
    refresh() {},
    rate(values) {
      for (const { species } of reactants) if (!(values.counts[species]! > 0)) return 0;
      return law(values) * fade(values.counts);
    },
    slopes(values, directionOf, slopes, offset) {
      dependsOn.forEach((along, index) => {
        const { value, slope } = derivativeAlong(expression, directionOf(along));
        const isFading = fading.includes(along) && values.counts[along]! < fadeCount;
        const fromFade = isFading ? (value * fade(values.counts, along)) / fadeCount : 0;
        slopes[offset + index] = finiteOrZero(slope * fade(values.counts) + fromFade);
      });
    },
  };
}

/** The Jacobian only steers the integrator, whose error control judges the step; an infinite slope would steer nowhere. */
const finiteOrZero = (value: number): number => (Number.isFinite(value) ? value : 0);
