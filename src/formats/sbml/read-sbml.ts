/**
 * Reads SBML (Level 3 Versions 1 and 2, Level 2) into a network document. What the document cannot say is refused by the
 * name of the element, with the reason and what to change; nothing is dropped in silence.
 */
import type { NetworkDocument, ObservableDocument, Problem } from '@/domain/network/document.ts';
import type { Expression } from '@/domain/network/expression.ts';
import { symbolsOf } from '@/domain/network/expression-leaves.ts';
import { limits } from '@/domain/limits.ts';
import { ModelNames, isMarked } from './model-names.ts';
import { readChanges } from './read-changes.ts';
import { readLambda } from './read-mathml.ts';
import {
  named,
  readCompartments,
  readParameters,
  readSpecies,
  startValuesOf,
  type Assigned,
} from './read-quantities.ts';
import { readReactions, textOf } from './read-reactions.ts';
import { readUnits, type UnitReading } from './read-units.ts';
import { mathmlNamespace, ownNamespace, sbmlVersionOf } from './sbml-names.ts';
import { SbmlReading, type ReadSbmlOptions } from './sbml-reading.ts';
import { refusePackages, refuseUnsupported } from './unsupported-elements.ts';
import { readXmlTree, type XmlElement } from './xml-tree.ts';

export type { ReadSbmlOptions } from './sbml-reading.ts';

export type SbmlOutcome =
  { ok: true; document: NetworkDocument; name: string | null; notes: Problem[] } | { ok: false; problems: Problem[] };

/**
 * The network in `text`, with notes on what was understood how; or every problem that keeps it from being used, each with
 * the path of its element and, in its message, line and column. Never throws. Follow with `checkNetwork`.
 */
export function readSbml(text: string, options: ReadSbmlOptions = {}): SbmlOutcome {
  const tree = readXmlTree(text, (element) => element.name === 'notes' || !isUnderstood(element.namespace));
  if (!tree.ok) {
    const { code, message, line, column } = tree.fault;
    return {
      ok: false,
      problems: [{ severity: 'error', path: '', code, message: `${message} (line ${line}, column ${column})` }],
    };
  }
  const { root } = tree;
  const version = sbmlVersionOf(root);
  if ('code' in version) return { ok: false, problems: [{ severity: 'error', path: root.name, ...version }] };

  const reading = new SbmlReading(version, root.namespace, options);
  refusePackages(reading, root);
  const model = reading.child(root, 'model');
  if (model === undefined) reading.refuse(root, 'missing_model', '<sbml> holds no <model>.');
  const document = model === undefined ? null : readModel(reading, model);
  if (document === null || reading.problems.length > 0) return { ok: false, problems: reading.problems };
  return { ok: true, document, name: named(model!).name ?? model!.attributes.get('id') ?? null, notes: reading.notes };
}

/** Content of other namespaces (annotations, packages) is not even kept. */
const isUnderstood = (namespace: string): boolean =>
  namespace === mathmlNamespace || namespace === ownNamespace || namespace.startsWith('http://www.sbml.org/sbml/level');

function readModel(reading: SbmlReading, model: XmlElement): NetworkDocument | null {
  refuseUnsupported(reading, model);
  if (tooManyRows(reading, model)) return null;
  const units = readUnits(reading, model);
  readFunctions(reading, model);
  const names = new ModelNames(reading, model, itemsPerSubstance(reading, model, units));
  const rules = readAssignments(reading, names, model, 'listOfRules', 'assignmentRule', 'variable');
  const initially = readAssignments(reading, names, model, 'listOfInitialAssignments', 'initialAssignment', 'symbol');
  const assigned: Assigned = { rules: expressionsOf(rules), initially: expressionsOf(initially) };
  for (const [id, { element }] of initially) {
    reading.inform(
      element,
      'initial_assignment_evaluated',
      `The initial value of ${id} was worked out once; it no longer follows what it was computed from.`,
    );
  }
  const start = startValuesOf(reading, names, assigned);
  const species = readSpecies(reading, names, start, assigned);
  const parameters = readParameters(reading, names, units, start, assigned);
  const observed = new Set(
    names.list('parameter').flatMap(({ id, element }) => (isMarked(element, 'observable') ? [id] : [])),
  );
  if (names.factorId !== null)
    parameters.push({
      id: names.factorId,
      name: 'Items per unit of substance in the imported file',
      value: names.itemsPerSubstance,
    });
  const timeUnit = units.textOf(model.attributes.get('timeUnits'));
  const changes = changesDuringRun(names, assigned);
  const events = readChanges({ reading, names, start, changes }, model);
  const recognised: XmlElement[] = [];
  const reactions = readReactions({
    reading,
    names,
    units,
    start,
    changes,
    negative: new Set(parameters.filter(({ value }) => value < 0).map(({ id }) => id)),
    recognised,
  });
  if (recognised.length > 0) {
    reading.inform(
      model,
      'read_as_mass_action',
      `${recognised.length} of ${reactions.length} laws are mass action in every state and were read as such; the others were kept word for word.`,
    );
  }
  const switches = names.timeSwitches.rows(start, changes);
  const stateChanges = [...switches.changes, ...events];
  return {
    ...(timeUnit === undefined ? {} : { timeUnit }),
    compartments: readCompartments(reading, names, units, start, assigned),
    species,
    parameters: [...parameters.filter(({ id }) => !observed.has(id)), ...switches.parameters],
    assignmentRules: [...rules].flatMap(([variable, rule]) =>
      observed.has(variable) ? [] : [{ variable, expression: textOf(reading, rule.element, rule.expression) }],
    ),
    reactions,
    observables: [...rules].flatMap(([id, rule]): ObservableDocument[] =>
      observed.has(id)
        ? [{ id, ...named(names.elements.get(id)!), expression: textOf(reading, rule.element, rule.expression) }]
        : [],
    ),
    ...(stateChanges.length === 0 ? {} : { changes: stateChanges }),
  };
}

/** Before anything is read: a list beyond every limit is one problem, not a hundred thousand. */
function tooManyRows(reading: SbmlReading, model: XmlElement): boolean {
  const most: Record<string, number> = {
    listOfReactions: limits.reactionsPerNetwork,
    listOfSpecies: limits.speciesPerNetwork,
    listOfParameters: limits.parametersPerNetwork,
    listOfCompartments: limits.parametersPerNetwork,
    listOfFunctionDefinitions: limits.parametersPerNetwork,
  };
  const long = model.children.filter(({ name, children }) => children.length > (most[name] ?? Infinity));
  for (const list of long) {
    reading.refuse(
      list,
      'too_many',
      `<${list.name}> has ${list.children.length.toLocaleString('en')} rows; a network holds at most ${most[list.name]!.toLocaleString('en')}.`,
    );
  }
  return long.length > 0;
}

function readFunctions(reading: SbmlReading, model: XmlElement): void {
  for (const element of reading.list(model, 'listOfFunctionDefinitions', 'functionDefinition')) {
    const id = reading.required(element, 'id');
    const math = element.children.find(({ name }) => name === 'math');
    if (math === undefined) reading.refuse(element, 'missing_math', `The function ${id} has no <math>.`);
    const definition = math === undefined ? null : reading.guarded(() => readLambda(math, reading.functions));
    if (definition !== null) reading.functions.set(id, definition);
  }
}

/** How many items the model's unit of substance is; what is not stated is taken as items. */
function itemsPerSubstance(reading: SbmlReading, model: XmlElement, units: UnitReading): number {
  const stated = [model, ...reading.list(model, 'listOfSpecies', 'species')]
    .map((element) => ({ element, unit: element.attributes.get('substanceUnits') }))
    .filter(({ unit }) => unit !== undefined);
  // Only Level 2 gives this id a meaning of its own.
  const redefined = reading.version.level === 2 ? units.itemsPer('substance') : null;
  if (stated.length === 0 && redefined === null) {
    if (reading.version.level === 2) {
      reading.warn(
        model,
        'substance_unit_assumed',
        'The file states no unit of substance, which by the standard means mole; its numbers were read as molecules. Check the initial counts.',
      );
    }
    return 1;
  }
  const factors = new Map(stated.map(({ element, unit }) => [units.itemsPer(unit!), element]));
  if (stated.length === 0) factors.set(redefined, model);
  const [[factor, element], second] = [...factors] as [
    [number | null, XmlElement],
    [number | null, XmlElement] | undefined,
  ];
  if (factor === null || second !== undefined) {
    const message =
      factor === null
        ? 'The unit of substance is neither items nor moles.'
        : 'Species have different units of substance.';
    reading.refuse(second?.[1] ?? element, 'substance_unit', `${message} Use one unit, item, for all species.`);
    return 1;
  }
  if (factor !== 1)
    reading.inform(
      model,
      'converted_to_items',
      `Amounts were converted to molecules: one unit of substance is ${factor} items.`,
    );
  return factor;
}

type Assignments = Map<string, { element: XmlElement; expression: Expression }>;

function readAssignments(
  reading: SbmlReading,
  names: ModelNames,
  model: XmlElement,
  list: string,
  item: string,
  attribute: string,
): Assignments {
  const assignments: Assignments = new Map();
  const others = list === 'listOfRules' ? ['rateRule', 'algebraicRule'] : [];
  for (const element of reading.list(model, list, item, ...others)) {
    if (element.name !== item) continue;
    const written = reading.required(element, attribute);
    const id = names.idOf(written);
    const target = names.elements.get(id);
    const expression = reading.math(element);
    if (target?.name === 'compartment' && item === 'assignmentRule') {
      reading.refuse(
        element,
        'variable_compartment',
        `${id} is a compartment set by a rule; only constant sizes are supported.`,
      );
    } else if (target?.name !== 'species' && target?.name !== 'parameter' && target?.name !== 'compartment') {
      reading.refuse(
        element,
        'unknown_name',
        `“${written}” is no species, parameter or compartment, so it cannot be set here (a stoichiometry must be a constant number).`,
      );
    } else if (assignments.has(id)) {
      reading.refuse(element, 'duplicate_rule', `${id} is set twice.`);
    } else if (expression !== null) {
      const own = names.inDocumentTerms(expression, element);
      assignments.set(id, { element, expression: target.name === 'species' ? names.inItems(own) : own });
    }
  }
  return assignments;
}

const expressionsOf = (assignments: Assignments): ReadonlyMap<string, Expression> =>
  new Map([...assignments].map(([id, { expression }]) => [id, expression]));

/** Whether a name is a species, or is worked out from one by rules. */
function changesDuringRun(names: ModelNames, { rules }: Assigned): (id: string) => boolean {
  const known = new Map<string, boolean>();
  return (id) => {
    const waiting = [id];
    const seen = new Set<string>();
    if (known.has(id)) return known.get(id)!;
    let changes = false;
    for (let next = waiting.pop(); next !== undefined && !changes; next = waiting.pop()) {
      if (seen.has(next)) continue;
      seen.add(next);
      const rule = rules.get(next);
      if (rule !== undefined) waiting.push(...symbolsOf(rule));
      else changes = names.sizeOf.has(next);
    }
    known.set(id, changes);
    return changes;
  };
}
