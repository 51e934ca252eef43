/** What names may stand in an expression, what is wrong with the others, and what a name depends on. */
import type { Problem } from './document.ts';
import type { Expression } from './expression.ts';
import { symbolsOf } from './expression-leaves.ts';
import { nearestName } from './identifiers.ts';
import type { ParsedNetwork } from './parse-network.ts';
import { error } from './problems.ts';

/** “ Did you mean …?”, or nothing. */
export const suggestion = (id: string, known: Iterable<string>): string => {
  const near = nearestName(id, known);
  return near === null ? '' : ` Did you mean ${near}?`;
};

/** A problem at `path` for each name of `expression` that may not stand there; `localParameters` shadow the others. */
export function checkNames(
  network: ParsedNetwork,
  expression: Expression | null,
  path: string,
  localParameters: ReadonlyMap<string, unknown> = new Map(),
): Problem[] {
  if (expression === null) return [];
  return [...symbolsOf(expression)]
    .filter((id) => !localParameters.has(id))
    .flatMap((id) => nameFault(network, id, localParameters))
    .map(({ code, message }) => error(path, code, message));
}

function nameFault(
  network: ParsedNetwork,
  id: string,
  localParameters: ReadonlyMap<string, unknown>,
): { code: string; message: string }[] {
  if (id === 'time') {
    const message =
      '“time” cannot stand in an expression: with a rate that drifts in time the waiting times are no longer exponential and the exact method does not hold.';
    return [{ code: 'time_in_expression', message }];
  }
  const known = network.names.get(id);
  if (known === undefined) {
    const usable = [...network.names].flatMap(([name, { kind }]) =>
      kind === 'species' || kind === 'parameter' || kind === 'compartment' ? [name] : [],
    );
    const message = `There is no species, parameter or compartment “${id}”.${suggestion(id, [...localParameters.keys(), ...usable])}`;
    return [{ code: 'unknown_name', message }];
  }
  const { compartments, species } = network.document;
  const unset = (compartment: string | undefined): boolean =>
    compartments?.find((row) => row.id === compartment)?.size === null;
  switch (known.kind) {
    case 'reaction':
      return [
        {
          code: 'reaction_in_expression',
          message: `“${id}” is a reaction; its rate cannot be used in an expression. Write the law out.`,
        },
      ];
    case 'observable':
      return [
        {
          code: 'observable_in_expression',
          message: `“${id}” is an observable; use an assignment rule for what other expressions need.`,
        },
      ];
    case 'change':
      return [{ code: 'change_in_expression', message: `“${id}” is a change, not a quantity.` }];
    case 'compartment':
      return unset(id)
        ? [{ code: 'unset_compartment', message: `The size of compartment ${id} is needed here and is not set.` }]
        : [];
    case 'species': {
      const { meaning, compartment } = species[known.index]!;
      if (meaning !== 'concentration' || !unset(compartment) || network.ruleOf.has(id)) return [];
      return [
        {
          code: 'unset_compartment',
          message: `${id} means a concentration, but the size of its compartment ${compartment} is not set.`,
        },
      ];
    }
    case 'parameter':
      return [];
  }
}

/** The first species, or name among `others`, on which the value of `id` depends, following rules; null when there is none. */
export function speciesBehind(
  network: ParsedNetwork,
  id: string,
  others: ReadonlySet<string> = new Set(),
): string | null {
  const seen = new Set<string>();
  const waiting = [id];
  for (let next = waiting.pop(); next !== undefined; next = waiting.pop()) {
    if (seen.has(next)) continue;
    seen.add(next);
    const rule = network.rules[network.ruleOf.get(next) ?? -1];
    if (rule !== undefined && rule !== null) waiting.push(...symbolsOf(rule));
    else if (network.names.get(next)?.kind === 'species' || others.has(next)) return next;
  }
  return null;
}
