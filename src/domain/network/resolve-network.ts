/** Turns a document into the indexed network that the engine runs, or into the errors that keep it from running. */
import { checkChanges } from './check-changes.ts';
import { checkOverrides } from './check-overrides.ts';
import { checkReferences, ruleUses } from './check-references.ts';
import { checkRows, checkSizes } from './check-rows.ts';
import type { NetworkDocument, Overrides, Problem } from './document.ts';
import { evaluateExpression } from './evaluate-expression.ts';
import { indexChanges } from './index-changes.ts';
import { indexNetwork } from './index-network.ts';
import { orderAssignmentRules } from './order-assignment-rules.ts';
import { parameterValuesAt } from './parameter-values.ts';
import { parseNetwork } from './parse-network.ts';
import { error, orderedProblems } from './problems.ts';
import type { ResolvedNetwork } from './resolved.ts';

export type ResolveOutcome = { ok: true; network: ResolvedNetwork } | { ok: false; problems: Problem[] };

/**
 * The network with `overrides` in place of the document's values. Local parameters shadow global names; a species that
 * means a concentration becomes count / compartment size; rules stand in dependency order. Never throws: everything
 * wrong is a problem with its path.
 */
export function resolveNetwork(document: NetworkDocument, overrides: Overrides = {}): ResolveOutcome {
  const oversize = checkSizes(document);
  if (oversize.length > 0) return { ok: false, problems: oversize };

  const parsed = parseNetwork(document);
  const problems = [
    ...checkRows(document),
    ...parsed.problems,
    ...checkReferences(parsed),
    ...checkChanges(parsed),
    ...checkOverrides(parsed, overrides),
  ];
  const ordered = orderAssignmentRules(ruleUses(parsed));
  if (problems.length > 0 || !ordered.ok) return { ok: false, problems: orderedProblems(problems) };

  const network = indexNetwork(parsed, overrides, ordered.order);
  const { changes, problems: timeFaults } = indexChanges(parsed, network, overrides.changeTimes);
  const lawPaths = parsed.reactions.map(({ lawPath }) => lawPath);
  const faults = [...checkConstantValues(network, lawPaths), ...timeFaults];
  return faults.length > 0
    ? { ok: false, problems: orderedProblems(faults) }
    : { ok: true, network: changes.length === 0 ? network : { ...network, changes } };
}

/** A constant of mass action holds no species, so a negative or undefined one is known to be wrong before the run. */
function checkConstantValues(network: ResolvedNetwork, lawPaths: string[]): Problem[] {
  const parameters = parameterValuesAt(
    network,
    network.species.map(({ initialCount }) => initialCount),
  );
  return network.reactions.flatMap(({ law }, index) => {
    if (law.kind !== 'massAction') return [];
    const value = evaluateExpression(law.constant, { parameters });
    if (Number.isFinite(value) && value >= 0) return [];
    const code = value < 0 ? 'negative_constant' : 'constant_not_a_number';
    return [error(lawPaths[index]!, code, `The rate constant comes to ${value}; it must be a number from 0 up.`)];
  });
}
