/** Reads every equation and expression of a document once, and lists what each name stands for. */
import type { NetworkDocument, ParameterDocument, Problem } from './document.ts';
import type { Expression } from './expression.ts';
import { parseEquation, type Equation } from './parse-equation.ts';
import { parseExpression } from './parse-expression.ts';
import { error } from './problems.ts';

export interface ParsedReaction {
  /** Null where the text could not be read; the problem is listed. */
  equation: Equation | null;
  law: Expression | null;
  lawPath: string;
  /** By id; they shadow every other name inside this law. */
  localParameters: Map<string, ParameterDocument>;
}

export interface ParsedChange {
  /** Of a timed change; `every` is null when it happens once, too. */
  time: Expression | null;
  every: Expression | null;
  /** Of a triggered change. */
  condition: Expression | null;
  /** By index of its assignments. */
  values: (Expression | null)[];
}

export type NameKind = 'species' | 'parameter' | 'compartment' | 'reaction' | 'observable' | 'change';

export interface ParsedNetwork {
  document: NetworkDocument;
  /** What each id is, and its index in the document's list of that kind. The first bearer of a doubled id counts. */
  names: Map<string, { kind: NameKind; index: number }>;
  reactions: ParsedReaction[];
  /** By index of the document's assignment rules and observables. */
  rules: (Expression | null)[];
  observables: (Expression | null)[];
  /** By index of the document's changes. */
  changes: ParsedChange[];
  /** Index of the rule of each assigned id. */
  ruleOf: Map<string, number>;
  /** Texts that could not be read. */
  problems: Problem[];
}

/** Never fails: what cannot be read is null and has a problem with its place. */
export function parseNetwork(document: NetworkDocument): ParsedNetwork {
  const problems: Problem[] = [];
  const expression = (text: string, path: string): Expression | null => {
    const parsed = parseExpression(text);
    if (parsed.ok) return parsed.expression;
    const { position, code, message } = parsed.fault;
    problems.push(error(path, code, text.trim() === '' ? message : `At character ${position + 1}: ${message}`));
    return null;
  };
  const equation = (text: string, path: string): Equation | null => {
    const parsed = parseEquation(text);
    if (parsed.ok) return parsed.equation;
    const { position, code, message } = parsed.fault;
    problems.push(error(path, code, text.trim() === '' ? message : `At character ${position + 1}: ${message}`));
    return null;
  };

  const reactions = document.reactions.map((reaction, index): ParsedReaction => {
    const law = reaction.rateLaw;
    const lawPath = `reactions[${index}].rateLaw.${law.kind === 'massAction' ? 'constant' : 'expression'}`;
    return {
      equation: equation(reaction.equation, `reactions[${index}].equation`),
      law: expression(law.kind === 'massAction' ? law.constant : law.expression, lawPath),
      lawPath,
      localParameters: new Map(reaction.localParameters?.map((parameter) => [parameter.id, parameter])),
    };
  });
  const rules = (document.assignmentRules ?? []).map((rule, index) =>
    expression(rule.expression, `assignmentRules[${index}].expression`),
  );
  const observables = (document.observables ?? []).map((observable, index) =>
    expression(observable.expression, `observables[${index}].expression`),
  );
  const changes = (document.changes ?? []).map(({ when, assignments }, index): ParsedChange => {
    const path = `changes[${index}]`;
    const isTimed = when.kind === 'time';
    return {
      time: isTimed ? expression(when.time, `${path}.when.time`) : null,
      every: isTimed && when.every !== undefined ? expression(when.every, `${path}.when.every`) : null,
      condition: isTimed ? null : expression(when.condition, `${path}.when.condition`),
      values: assignments.map(({ expression: text }, row) =>
        expression(text, `${path}.assignments[${row}].expression`),
      ),
    };
  });
  const ruleOf = new Map<string, number>();
  document.assignmentRules?.forEach(({ variable }, index) => {
    if (!ruleOf.has(variable)) ruleOf.set(variable, index);
  });
  return { document, names: namesOf(document), reactions, rules, observables, changes, ruleOf, problems };
}

function namesOf(document: NetworkDocument): ParsedNetwork['names'] {
  const names: ParsedNetwork['names'] = new Map();
  const add = (kind: NameKind, rows: { id: string }[] | undefined) =>
    rows?.forEach(({ id }, index) => {
      if (!names.has(id)) names.set(id, { kind, index });
    });
  add('compartment', document.compartments);
  add('species', document.species);
  add('parameter', document.parameters);
  add('reaction', document.reactions);
  add('observable', document.observables);
  add('change', document.changes);
  return names;
}
