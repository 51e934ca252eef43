/** Reads reactions: their equations, kinetic laws and local parameters. */
import type { ParameterDocument, RateLawDocument, ReactionDocument } from '@/domain/network/document.ts';
import { evaluateExpression } from '@/domain/network/evaluate-expression.ts';
import type { Expression } from '@/domain/network/expression.ts';
import { parseExpression } from '@/domain/network/parse-expression.ts';
import { printEquation } from '@/domain/network/print-equation.ts';
import { printExpression } from '@/domain/network/print-expression.ts';
import { amountOf, withoutGuard } from './guarded-law.ts';
import { isMarked, type ModelNames } from './model-names.ts';
import { named, type StartValues } from './read-quantities.ts';
import type { UnitReading } from './read-units.ts';
import { recogniseMassAction } from './recognise-mass-action.ts';
import { isNeverNegative, splitDifference } from './reversible-law.ts';
import type { SbmlReading } from './sbml-reading.ts';
import type { XmlElement } from './xml-tree.ts';

export interface ReactionSurroundings {
  reading: SbmlReading;
  names: ModelNames;
  units: UnitReading;
  /** Whether a global name stands for, or depends on, something that changes during a run. */
  changes: (id: string) => boolean;
  start: StartValues;
  /** Global names whose values are negative. */
  negative: ReadonlySet<string>;
  /** Filled with the laws that were found to be mass action. */
  recognised: XmlElement[];
}

type Term = { species: string; count: number };

export function readReactions(around: ReactionSurroundings): ReactionDocument[] {
  return around.names.list('reaction').flatMap(({ id, element }) => readReaction(around, id, element));
}

function readReaction(around: ReactionSurroundings, id: string, element: XmlElement): ReactionDocument[] {
  const { reading, names } = around;
  if (reading.boolean(element, 'fast', false)) {
    reading.refuse(
      element,
      'fast_reaction',
      `${id} is marked fast, which is not supported; give it a large rate constant or eliminate it by hand.`,
    );
  }
  const reactants = readSide(around, element, 'listOfReactants');
  const products = readSide(around, element, 'listOfProducts');
  if (reactants.length === 0 && products.length === 0)
    reading.refuse(element, 'empty_equation', `${id} has neither reactants nor products.`);
  const kineticLaw = reading.child(element, 'kineticLaw');
  if (kineticLaw === undefined) {
    reading.refuse(element, 'missing_kinetic_law', `${id} has no kinetic law; without one there is no propensity.`);
    return [];
  }
  const locals = readLocals(around, kineticLaw);
  const law = reading.math(kineticLaw);
  if (law === null) return [];
  const propensity = names.inItems(
    names.inDocumentTerms(law, kineticLaw, new Set(locals.map(({ written }) => written))),
  );
  const parameters = locals.map(({ parameter }) => parameter);
  const row = (rowId: string, from: Term[], to: Term[], rate: Expression): ReactionDocument => ({
    id: rowId,
    ...named(element),
    equation: printEquation({ reactants: placed(from), products: placed(to), reversible: false }),
    rateLaw: lawOf(around, kineticLaw, from, parameters, rate),
    ...(parameters.length === 0 ? {} : { localParameters: parameters }),
  });

  const forwardOnly = [row(id, reactants, products, propensity)];
  if (!reading.boolean(element, 'reversible', reading.version.level === 2)) return forwardOnly;
  const negative = new Set([
    ...around.negative,
    ...parameters.filter(({ value }) => value < 0).map((parameter) => parameter.id),
  ]);
  if (forwardOnly[0]!.rateLaw.kind === 'massAction' || isNeverNegative(propensity, negative)) {
    reading.inform(
      element,
      'reversible_in_name',
      `${id} is marked reversible, but its law is never negative; it runs forward only.`,
    );
    return forwardOnly;
  }
  return splitReversible(around, id, element, propensity, negative, (direction, rate) =>
    direction === 'forward'
      ? row(names.freeId(`${id}_forward`), reactants, products, rate)
      : row(names.freeId(`${id}_backward`), products, reactants, rate),
  );
}

/** A law that may go negative has no propensity: it is two reactions, when a forward and a backward part can be told apart. */
function splitReversible(
  { reading }: ReactionSurroundings,
  id: string,
  element: XmlElement,
  law: Expression,
  negative: ReadonlySet<string>,
  row: (direction: 'forward' | 'backward', rate: Expression) => ReactionDocument,
): ReactionDocument[] {
  const parts = splitDifference(law);
  const separable =
    parts !== null && isNeverNegative(parts.forward, negative) && isNeverNegative(parts.backward, negative);
  if (separable && reading.options.splitReversible === true) {
    reading.inform(element, 'reversible_split', `${id} was split into a forward and a backward reaction, as agreed.`);
    return [row('forward', parts.forward), row('backward', parts.backward)];
  }
  const advice = separable
    ? `Split it into two reactions? Forward: ${printExpression(parts.forward)}; backward: ${printExpression(parts.backward)}.`
    : 'Write it as two reactions, each with a law that is never negative.';
  reading.refuse(
    element,
    'reversible_reaction',
    `${id} is reversible and its law may go negative, which is no propensity. ${advice}`,
  );
  return [];
}

function readSide({ reading, names }: ReactionSurroundings, element: XmlElement, list: string): Term[] {
  const terms = new Map<string, Term>();
  for (const reference of reading.list(element, list, 'speciesReference')) {
    const written = reading.required(reference, 'species');
    const species = names.idOf(written);
    const home = names.elements.get(species);
    if (home?.name !== 'species') {
      if (written !== '') reading.refuse(reference, 'unknown_species', `There is no species “${written}”.`);
      continue;
    }
    if (reading.boolean(home, 'constant', false) && !reading.boolean(home, 'boundaryCondition', false)) {
      reading.refuse(
        reference,
        'constant_species',
        `${species} is constant and no boundary species, so no reaction may take or make it.`,
      );
    }
    const count = readStoichiometry(reading, reference, species);
    const known = terms.get(species);
    if (known === undefined) terms.set(species, { species, count });
    else known.count += count;
  }
  return [...terms.values()].filter(({ count }) => count > 0);
}

function readStoichiometry(reading: SbmlReading, reference: XmlElement, species: string): number {
  if (reading.child(reference, 'stoichiometryMath') !== undefined) {
    reading.refuse(
      reference,
      'stoichiometry_maths',
      `The stoichiometry of ${species} is an expression (stoichiometryMath), which is not supported; write a whole number.`,
    );
    return 1;
  }
  const count = reading.number(reference, 'stoichiometry');
  if (count === null && reading.version.level === 3) {
    reading.refuse(reference, 'missing_attribute', `The stoichiometry of ${species} is not set.`);
    return 1;
  }
  if (Number.isNaN(count)) return 1;
  if (count !== null && (!Number.isInteger(count) || count < 0)) {
    const code = count < 0 ? 'negative_stoichiometry' : 'non_integer_stoichiometry';
    reading.refuse(
      reference,
      code,
      `${count} of ${species}: stoichiometry is a whole number from 0 up, since molecules react one by one.`,
    );
    return 1;
  }
  return count ?? 1;
}

function readLocals(
  { reading, names, units }: ReactionSurroundings,
  kineticLaw: XmlElement,
): { written: string; parameter: ParameterDocument }[] {
  const elements =
    reading.version.level === 3
      ? reading.list(kineticLaw, 'listOfLocalParameters', 'localParameter')
      : reading.list(kineticLaw, 'listOfParameters', 'parameter');
  return elements.map((element) => {
    const written = reading.required(element, 'id');
    const value = reading.number(element, 'value');
    if (value === null) reading.refuse(element, 'missing_value', `The local parameter ${written} has no value.`);
    const unit = units.textOf(element.attributes.get('units'));
    return {
      written,
      parameter: {
        id: names.idOf(written),
        ...named(element),
        value: value ?? 0,
        ...(unit === undefined ? {} : { unit }),
      },
    };
  });
}

function lawOf(
  around: ReactionSurroundings,
  kineticLaw: XmlElement,
  reactants: Term[],
  locals: ParameterDocument[],
  law: Expression,
): RateLawDocument {
  const local = new Map(locals.map(({ id, value }) => [id, value]));
  const sizeOf = (id: string) => (local.has(id) ? null : around.names.sizeOf.get(id));
  if (isMarked(kineticLaw, 'expression')) {
    const needs = reactants.map(({ species, count }) => ({
      count,
      amount: amountOf(species, sizeOf(species) ?? null),
    }));
    return { kind: 'expression', expression: textOf(around.reading, kineticLaw, withoutGuard(law, needs)) };
  }
  // A negative constant is a mistake that stops the run and names the law; the law is then kept for the person to see.
  const isPropensity = (constant: Expression): boolean => {
    const value = evaluateExpression(constant, { symbol: (id) => local.get(id) ?? around.start(id) });
    return value >= 0 && value < Infinity;
  };
  const constant = recogniseMassAction(law, {
    reactants,
    sizeOf,
    changes: (id) => !local.has(id) && around.changes(id),
  });
  if (constant !== null && isPropensity(constant)) {
    around.recognised.push(kineticLaw);
    return { kind: 'massAction', constant: textOf(around.reading, kineticLaw, constant) };
  }
  return { kind: 'expression', expression: textOf(around.reading, kineticLaw, law) };
}

/** The text of an expression, or a refusal when it is longer or deeper than a stored one may be. */
export function textOf(reading: SbmlReading, element: XmlElement, expression: Expression): string {
  const text = printExpression(expression);
  const parsed = parseExpression(text);
  if (!parsed.ok) reading.refuse(element, parsed.fault.code, parsed.fault.message);
  return text;
}

const placed = (terms: Term[]) => terms.map((term) => ({ ...term, position: 0 }));
