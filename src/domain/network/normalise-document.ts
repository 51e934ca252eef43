/** The one canonical form of a document, so that equal networks have equal JSON and therefore equal content hashes. */
import type {
  AssignmentRuleDocument,
  ChangeDocument,
  ChangeMoment,
  CompartmentDocument,
  NetworkDocument,
  ObservableDocument,
  ParameterDocument,
  ReactionDocument,
  SpeciesDocument,
} from './document.ts';
import { parseEquation } from './parse-equation.ts';
import { printEquation } from './print-equation.ts';

/**
 * Fills defaults, fixes the order of keys, drops what says nothing (blank names and units, unknown keys), trims texts and
 * prints equations the product's way. Rows keep their order. `JSON.stringify` of the result is canonical, and
 * normalising it again changes nothing. Texts that cannot be read are kept as they are.
 */
export function normaliseDocument(document: NetworkDocument): NetworkDocument {
  return {
    ...optional('timeUnit', document.timeUnit),
    compartments: (document.compartments ?? []).map(compartment),
    species: document.species.map(species),
    parameters: (document.parameters ?? []).map(parameter),
    assignmentRules: (document.assignmentRules ?? []).map(assignmentRule),
    reactions: document.reactions.map(reaction),
    observables: (document.observables ?? []).map(observable),
    // Left out when there are none, so that networks from before changes existed keep their hash.
    ...((document.changes ?? []).length === 0 ? {} : { changes: document.changes!.map(change) }),
  };
}

/** The property when its text says something, else nothing. */
function optional<Key extends string>(key: Key, text: string | undefined): { [key in Key]?: string } {
  const trimmed = text?.trim();
  return trimmed === undefined || trimmed === '' ? {} : ({ [key]: trimmed } as { [key in Key]: string });
}

const compartment = ({ id, name, size, unit }: CompartmentDocument): CompartmentDocument => ({
  id: id.trim(),
  ...optional('name', name),
  size,
  ...optional('unit', unit),
});

const species = ({ id, name, compartment, initialCount, boundary, meaning }: SpeciesDocument): SpeciesDocument => ({
  id: id.trim(),
  ...optional('name', name),
  ...optional('compartment', compartment),
  initialCount,
  boundary: boundary ?? false,
  meaning: meaning ?? 'count',
});

const parameter = ({ id, name, value, unit }: ParameterDocument): ParameterDocument => ({
  id: id.trim(),
  ...optional('name', name),
  value,
  ...optional('unit', unit),
});

const assignmentRule = ({ variable, expression }: AssignmentRuleDocument): AssignmentRuleDocument => ({
  variable: variable.trim(),
  expression: expression.trim(),
});

const reaction = ({ id, name, equation, rateLaw, localParameters }: ReactionDocument): ReactionDocument => ({
  id: id.trim(),
  ...optional('name', name),
  equation: canonicalEquation(equation),
  rateLaw:
    rateLaw.kind === 'massAction'
      ? { kind: 'massAction', constant: rateLaw.constant.trim() }
      : { kind: 'expression', expression: rateLaw.expression.trim() },
  localParameters: (localParameters ?? []).map(parameter),
});

const observable = ({ id, name, expression }: ObservableDocument): ObservableDocument => ({
  id: id.trim(),
  ...optional('name', name),
  expression: expression.trim(),
});

const change = ({ id, name, when, assignments }: ChangeDocument): ChangeDocument => ({
  id: id.trim(),
  ...optional('name', name),
  when: moment(when),
  assignments: assignments.map(assignmentRule),
});

function moment(when: ChangeMoment): ChangeMoment {
  if (when.kind === 'condition') {
    return { kind: 'condition', condition: when.condition.trim(), happensAtStart: when.happensAtStart ?? false };
  }
  const { time, every, times } = when;
  return { kind: 'time', time: time.trim(), ...optional('every', every), ...(times === undefined ? {} : { times }) };
}

function canonicalEquation(text: string): string {
  const parsed = parseEquation(text);
  return parsed.ok ? printEquation(parsed.equation) : text.trim();
}
