/** The propensity of a reaction in a given state, worked out plainly: for checks and the editor, not for the engine. */
import { evaluateExpression } from './evaluate-expression.ts';
import type { ResolvedReaction } from './resolved.ts';

/** Ways of choosing `chosen` out of `count` molecules; 0 when there are too few. */
export function waysOfChoosing(count: number, chosen: number): number {
  if (count < chosen) return 0;
  let ways = 1;
  for (let taken = 0; taken < chosen; taken++) ways = (ways * (count - taken)) / (taken + 1);
  return ways;
}

/** Whether every reactant is there in the numbers the reaction takes. */
export function hasReactants({ reactants }: ResolvedReaction, counts: ArrayLike<number>): boolean {
  return reactants.every(({ species, count }) => counts[species]! >= count);
}

/** The value of the law, in events per unit of time, without the guard that a reaction needs its reactants. */
export function lawValue(reaction: ResolvedReaction, counts: ArrayLike<number>, parameters: ArrayLike<number>): number {
  const { law, reactants } = reaction;
  if (law.kind === 'expression') return evaluateExpression(law.expression, { species: counts, parameters });
  return reactants.reduce(
    (product, { species, count }) => product * waysOfChoosing(counts[species]!, count),
    evaluateExpression(law.constant, { parameters }),
  );
}
