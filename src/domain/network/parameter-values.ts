/** Every parameter's value in a given state, with the assignment rules applied: for checks and readers, not for the engine. */
import { evaluateExpression } from './evaluate-expression.ts';
import type { ResolvedNetwork } from './resolved.ts';

/** One number for each of `network.parameters`, given one count for each of `network.species`. */
export function parameterValuesAt(network: ResolvedNetwork, counts: ArrayLike<number>): Float64Array {
  const parameters = Float64Array.from(network.parameters, ({ value }) => value);
  for (const { parameter, expression } of network.assignments) {
    parameters[parameter] = evaluateExpression(expression, { species: counts, parameters });
  }
  return parameters;
}
