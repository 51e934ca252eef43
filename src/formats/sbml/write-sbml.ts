/** Writes a network document as SBML Level 3 Version 2. */
import type { NetworkDocument, ReactionDocument, SpeciesDocument } from '@/domain/network/document.ts';
import type { Expression } from '@/domain/network/expression.ts';
import { mapLeaves, symbolsOf } from '@/domain/network/expression-leaves.ts';
import { parseEquation, type EquationTerm } from '@/domain/network/parse-equation.ts';
import { vanishesWithoutReactants } from '@/domain/network/vanishing-law.ts';
import { amountOf, guardedLaw, type Need } from './guarded-law.ts';
import { ownNamespace, writtenNamespace } from './sbml-names.ts';
import { writeChanges } from './write-changes.ts';
import { UnitsToWrite } from './write-units.ts';
import { parsedLaw, writeMathml } from './write-mathml.ts';
import { element, freeId, list } from './xml-writing.ts';

/**
 * A count is a pure number here. SBML's unit “item” would say so more loudly, but then c·x·(x − 1)/2 with c per unit of time,
 * which is what a propensity is, would fail the standard's own check of units.
 */
const countUnit = 'dimensionless';

interface Surroundings {
  species: ReadonlyMap<string, SpeciesDocument>;
  ids: ReadonlySet<string>;
  units: UnitsToWrite;
}

/**
 * The SBML text of a document without errors (`checkNetwork`); throws on one with unreadable equations or laws. Laws are in
 * firings per unit of time. Mass action is written out as c·x·(x − 1)/2 …, and a law that might stay positive without its
 * reactants as piecewise, so that other programs do what this one does. Observables become parameters set by rules.
 */
export function writeSbml(document: NetworkDocument, { modelId, name }: { modelId: string; name: string }): string {
  const units = new UnitsToWrite();
  const ids = takenIds(document);
  const species = new Map(document.species.map((row) => [row.id, row]));
  const around: Surroundings = { species, ids, units };
  const home = needsHome(document) ? freeId('everywhere', ids) : null;
  const assigned = new Set(document.assignmentRules?.map(({ variable }) => variable));
  const set = new Set(document.changes?.flatMap(({ assignments }) => assignments.map(({ variable }) => variable)));
  // Contents first: they ask for the units whose definitions stand before them.
  const timeUnits = units.timeUnit(document.timeUnit);
  const contents = [
    list('listOfCompartments', [
      ...(document.compartments ?? []).map((row) => compartment(row, units)),
      ...(home === null ? [] : [implicitCompartment(home)]),
    ]),
    list(
      'listOfSpecies',
      document.species.map((row) => speciesElement(assigned, row, home)),
    ),
    list('listOfParameters', parameters(document, new Set([...assigned, ...set]), units)),
    list('listOfRules', rules(document)),
    list(
      'listOfReactions',
      document.reactions.map((row) => reaction(around, row)),
    ),
    list('listOfEvents', writeChanges(document.changes ?? [], ids)),
  ];
  const model = element(
    'model',
    { id: modelIdentifier(modelId), name, substanceUnits: countUnit, timeUnits, extentUnits: countUnit },
    [list('listOfUnitDefinitions', units.definitions()), ...contents],
  );
  const sbml = element('sbml', { xmlns: writtenNamespace, level: '3', version: '2' }, [model]);
  return `<?xml version="1.0" encoding="UTF-8"?>\n${sbml}\n`;
}

/** An SId made of any id. */
function modelIdentifier(id: string): string {
  const cleaned = id.replaceAll(/[^A-Za-z0-9_]/g, '_');
  return /^[A-Za-z_]/.test(cleaned) ? cleaned : `model_${cleaned}`;
}

function takenIds(document: NetworkDocument): Set<string> {
  const rows = [
    document.compartments,
    document.species,
    document.parameters,
    document.reactions,
    document.observables,
    document.changes,
  ];
  return new Set(rows.flatMap((list) => list?.map(({ id }) => id) ?? []));
}

/** SBML puts every species into a compartment; ours may do without. */
const needsHome = (document: NetworkDocument): boolean =>
  document.species.some(({ compartment }) => compartment === undefined);

const mark = (name: string): string =>
  element('annotation', {}, [element(`burette:${name}`, { 'xmlns:burette': ownNamespace })]);

function compartment(
  { id, name, size, unit }: NonNullable<NetworkDocument['compartments']>[number],
  units: UnitsToWrite,
): string {
  return element('compartment', {
    id,
    name,
    spatialDimensions: '3',
    size: size === null ? undefined : String(size),
    units: units.sizeUnit(unit),
    constant: 'true',
  });
}

const implicitCompartment = (id: string): string =>
  element('compartment', { id, spatialDimensions: '3', size: '1', units: 'litre', constant: 'true' }, [
    mark('implicit'),
  ]);

function speciesElement(assigned: ReadonlySet<string>, species: SpeciesDocument, home: string | null): string {
  return element('species', {
    id: species.id,
    name: species.name,
    compartment: species.compartment ?? home!,
    initialAmount: assigned.has(species.id) ? undefined : String(species.initialCount),
    substanceUnits: countUnit,
    hasOnlySubstanceUnits: String(species.meaning !== 'concentration'),
    boundaryCondition: String(species.boundary ?? false),
    constant: 'false',
  });
}

function parameters(document: NetworkDocument, varying: ReadonlySet<string>, units: UnitsToWrite): string[] {
  return [
    ...(document.parameters ?? []).map(({ id, name, value, unit }) =>
      element('parameter', {
        id,
        name,
        value: String(value),
        units: units.unit(unit),
        constant: String(!varying.has(id)),
      }),
    ),
    ...(document.observables ?? []).map(({ id, name }) =>
      element('parameter', { id, name, constant: 'false' }, [mark('observable')]),
    ),
  ];
}

function rules(document: NetworkDocument): string[] {
  const rows = [
    ...(document.assignmentRules ?? []),
    ...(document.observables ?? []).map(({ id, expression }) => ({ variable: id, expression })),
  ];
  return rows.map(({ variable, expression }) =>
    element('assignmentRule', { variable }, [writeMathml(parsedLaw(expression))]),
  );
}

function reaction(around: Surroundings, row: ReactionDocument): string {
  const equation = parseEquation(row.equation);
  if (!equation.ok) throw new TypeError(`${row.id}: ${equation.fault.message}`);
  const { reactants, products } = equation.equation;
  const { law, localIds } = writtenLaw(around, row, reactants);
  const locals = (row.localParameters ?? []).map(({ id, name, value, unit }) =>
    element('localParameter', {
      id: localIds.get(id) ?? id,
      name,
      value: String(value),
      units: around.units.unit(unit),
    }),
  );
  const local = new Set((row.localParameters ?? []).map(({ id }) => localIds.get(id) ?? id));
  const inEquation = new Set([...reactants, ...products].map(({ species }) => species));
  const modifiers = [...symbolsOf(law)].filter((id) => around.species.has(id) && !local.has(id) && !inEquation.has(id));
  return element('reaction', { id: row.id, name: row.name, reversible: 'false' }, [
    list('listOfReactants', reactants.map(reference)),
    list('listOfProducts', products.map(reference)),
    list(
      'listOfModifiers',
      modifiers.map((species) => element('modifierSpeciesReference', { species })),
    ),
    element('kineticLaw', {}, [
      row.rateLaw.kind === 'expression' ? mark('expression') : '',
      writeMathml(law),
      list('listOfLocalParameters', locals),
    ]),
  ]);
}

const reference = ({ species, count }: EquationTerm): string =>
  element('speciesReference', { species, stoichiometry: String(count), constant: 'true' });

/** The law in full, and new ids for local parameters that would hide a species or compartment the full form brings in. */
function writtenLaw(around: Surroundings, { rateLaw, localParameters }: ReactionDocument, reactants: EquationTerm[]) {
  const locals = localParameters ?? [];
  const counts = reactants.map(({ count, species }) => ({ count, amount: countOf(around, species) }));
  const stated = parsedLaw(rateLaw.kind === 'massAction' ? rateLaw.constant : rateLaw.expression);
  const isGuarded = rateLaw.kind === 'expression' && !vanishesWithoutReactants(stated, unshadowed(reactants, locals));
  // Names brought in by the written law, and species, which SBML does not let a local parameter hide.
  const broughtIn = new Set(counts.flatMap(({ amount }) => [...symbolsOf(amount)]));
  const hiding = locals.filter(({ id }) => broughtIn.has(id) || around.species.has(id));
  const localIds = new Map(
    hiding.map(({ id }) => [id, freeId(`${id}_local`, new Set([...around.ids, ...locals.map((local) => local.id)]))]),
  );
  const own = mapLeaves(stated, (leaf) =>
    leaf.kind === 'symbol' ? { kind: 'symbol', id: localIds.get(leaf.id) ?? leaf.id } : leaf,
  );
  if (rateLaw.kind === 'massAction') return { law: massActionLaw(own, counts), localIds };
  return { law: isGuarded ? guardedLaw(own, counts) : own, localIds };
}

/** A reactant hidden by a local parameter of the same name does not stand in the law at all. */
const unshadowed = (reactants: EquationTerm[], locals: { id: string }[]) =>
  reactants.map(({ species, count }) => ({ species: locals.some(({ id }) => id === species) ? '' : species, count }));

const binary = (
  operator: Extract<Expression, { kind: 'binary' }>['operator'],
  left: Expression,
  right: Expression,
): Expression => ({
  kind: 'binary',
  operator,
  left,
  right,
});
const number = (value: number): Expression => ({ kind: 'number', value });

function countOf({ species }: Surroundings, id: string): Expression {
  const { meaning, compartment } = species.get(id)!;
  return amountOf(id, meaning === 'concentration' ? compartment! : null);
}

/** c · Π x·(x − 1)···/n!, as recognise-mass-action.ts reads it back. */
function massActionLaw(constant: Expression, counts: Need[]): Expression {
  let law = constant;
  for (const { count, amount } of counts) {
    let orders = 1;
    for (let taken = 0; taken < count; taken++) {
      law = binary('multiply', law, taken === 0 ? amount : binary('subtract', amount, number(taken)));
      orders *= taken + 1;
    }
    if (orders > 1) law = binary('divide', law, number(orders));
  }
  return law;
}
