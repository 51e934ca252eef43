/** Names that equations and laws use and no row defines: what the editor offers to add. */
import type { NetworkDocument } from '@/domain/network/document.ts';
import { symbolsOf } from '@/domain/network/expression-leaves.ts';
import { identifierFault } from '@/domain/network/identifiers.ts';
import { parseEquation } from '@/domain/network/parse-equation.ts';
import { parseExpression } from '@/domain/network/parse-expression.ts';

export interface MissingNames {
  species: string[];
  parameters: string[];
}

/** A name in an equation is a species; any other unknown name in a law, rule or observable is taken for a parameter. */
export function missingNames(document: NetworkDocument): MissingNames {
  const known = new Set(
    [
      ...document.species,
      ...(document.parameters ?? []),
      ...(document.compartments ?? []),
      ...document.reactions,
      ...(document.observables ?? []),
    ].map(({ id }) => id),
  );
  const species = new Set<string>();
  for (const { equation } of document.reactions) {
    const parsed = parseEquation(equation);
    if (!parsed.ok) continue;
    for (const term of [...parsed.equation.reactants, ...parsed.equation.products]) {
      if (!known.has(term.species)) species.add(term.species);
    }
  }
  const parameters = new Set<string>();
  const look = (text: string, local: ReadonlySet<string> = new Set()): void => {
    const parsed = parseExpression(text);
    if (!parsed.ok) return;
    for (const id of symbolsOf(parsed.expression)) {
      if (!known.has(id) && !species.has(id) && !local.has(id) && identifierFault(id) === null) parameters.add(id);
    }
  };
  for (const { rateLaw, localParameters } of document.reactions) {
    look(
      rateLaw.kind === 'massAction' ? rateLaw.constant : rateLaw.expression,
      new Set((localParameters ?? []).map(({ id }) => id)),
    );
  }
  for (const { expression } of document.assignmentRules ?? []) look(expression);
  for (const { expression } of document.observables ?? []) look(expression);
  for (const { when, assignments } of document.changes ?? []) {
    const moment = when.kind === 'time' ? [when.time, when.every ?? ''] : [when.condition];
    for (const text of [...moment, ...assignments.map(({ expression }) => expression)]) look(text);
  }
  return { species: [...species], parameters: [...parameters] };
}
