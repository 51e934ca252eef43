/** Reads compartments, species and parameters, and works out their values at time 0. */
import { countFault } from '@/domain/network/check-rows.ts';
import type { CompartmentDocument, ParameterDocument, SpeciesDocument } from '@/domain/network/document.ts';
import { evaluateExpression } from '@/domain/network/evaluate-expression.ts';
import type { Expression } from '@/domain/network/expression.ts';
import type { ModelNames } from './model-names.ts';
import type { UnitReading } from './read-units.ts';
import type { SbmlReading } from './sbml-reading.ts';
import type { XmlElement } from './xml-tree.ts';

/** Rules and initial assignments by the (renamed) id they set, in the document's terms. */
export interface Assigned {
  rules: ReadonlyMap<string, Expression>;
  initially: ReadonlyMap<string, Expression>;
}

/** Values at time 0 by id, as expressions of the document mean them. */
export type StartValues = (id: string) => number;

/** Chains of assignments longer than this are not followed. */
const chainMost = 500;

export function startValuesOf(reading: SbmlReading, names: ModelNames, assigned: Assigned): StartValues {
  const known = new Map<string, number>();
  const open = new Set<string>();
  const valueOf = (id: string): number => {
    const before = known.get(id);
    if (before !== undefined) return before;
    if (id === names.factorId) return names.itemsPerSubstance;
    const moment = names.timeSwitches.momentOf(id);
    if (moment !== null) return evaluateExpression(moment, { symbol: valueOf }) > 0 ? 0 : 1;
    const element = names.elements.get(id);
    if (element === undefined) return NaN;
    if (open.has(id) || open.size > chainMost) {
      reading.refuse(
        element,
        'cyclic_assignments',
        `The initial value of ${id} depends on itself, through assignments.`,
      );
      return NaN;
    }
    open.add(id);
    const expression = assigned.rules.get(id) ?? assigned.initially.get(id);
    const value = expression === undefined ? stated(element, id) : evaluateExpression(expression, { symbol: valueOf });
    open.delete(id);
    known.set(id, value);
    return value;
  };
  const stated = (element: XmlElement, id: string): number => {
    if (element.name === 'compartment') return reading.number(element, 'size') ?? NaN;
    if (element.name === 'parameter') return reading.number(element, 'value') ?? NaN;
    const amount = reading.number(element, 'initialAmount');
    const concentration = reading.number(element, 'initialConcentration');
    const size = names.sizeOf.get(id);
    const meansAmount = size === null;
    if (amount !== null) return (amount * names.itemsPerSubstance) / (meansAmount ? 1 : valueOf(size!));
    if (concentration === null) return NaN;
    return concentration * names.itemsPerSubstance * (meansAmount ? valueOf(names.compartmentOf.get(id)!) : 1);
  };
  return valueOf;
}

export function readCompartments(
  reading: SbmlReading,
  names: ModelNames,
  units: UnitReading,
  start: StartValues,
  assigned: Assigned,
): CompartmentDocument[] {
  return names.list('compartment').flatMap(({ id, element }) => {
    const size = element.attributes.has('size') || assigned.initially.has(id) ? start(id) : null;
    if (size !== null && !(size > 0))
      reading.refuse(element, 'invalid_size', `The size of ${id} comes to ${size}; it must be above 0.`);
    const unit = units.textOf(element.attributes.get('units'));
    return names.isImplicit(element) ? [] : [{ id, ...named(element), size, ...(unit === undefined ? {} : { unit }) }];
  });
}

export function readSpecies(
  reading: SbmlReading,
  names: ModelNames,
  start: StartValues,
  assigned: Assigned,
): SpeciesDocument[] {
  return names.list('species').map(({ id, element }) => {
    const size = names.sizeOf.get(id)!;
    const compartment = names.compartmentOf.get(id);
    return {
      id,
      ...named(element),
      ...(compartment === undefined || names.isImplicit(names.elements.get(compartment)) ? {} : { compartment }),
      // A rule sets the value from the start; the count stored beside it plays no part.
      initialCount: assigned.rules.has(id) ? 0 : initialCount(reading, names, element, id, start, assigned),
      boundary: names.isBoundary(id),
      meaning: size === null ? 'count' : 'concentration',
    };
  });
}

function initialCount(
  reading: SbmlReading,
  names: ModelNames,
  element: XmlElement,
  id: string,
  start: StartValues,
  assigned: Assigned,
): number {
  const [amount, concentration] = [
    element.attributes.has('initialAmount'),
    element.attributes.has('initialConcentration'),
  ];
  if (amount && concentration) {
    reading.refuse(element, 'two_initial_values', `${id} has both an initial amount and a concentration; keep one.`);
    return 0;
  }
  if (!amount && !concentration && !assigned.initially.has(id)) {
    reading.refuse(element, 'missing_initial_value', `${id} has no initial amount; set initialAmount.`);
    return 0;
  }
  const exact = exactCount(reading, names, element, id, start, assigned);
  if (Number.isNaN(exact)) {
    const compartment = names.compartmentOf.get(id);
    reading.refuse(
      element,
      'unknown_initial_value',
      `The initial count of ${id} cannot be worked out; is the size of ${compartment ?? 'its compartment'} set?`,
    );
    return 0;
  }
  const count = withoutRoundingError(exact);
  if (!Number.isInteger(count) && reading.options.roundInitialCounts === true) {
    reading.inform(
      element,
      'count_rounded',
      `The initial count of ${id} was rounded from ${exact} to ${Math.round(exact)}, as agreed.`,
    );
    return Math.round(exact);
  }
  const fault = countFault(count);
  if (fault !== null) reading.refuse(element, fault.code, `${id}: ${fault.message}`);
  return count;
}

/** An amount needs no compartment size; everything else goes through what the id means in expressions. */
function exactCount(
  reading: SbmlReading,
  names: ModelNames,
  element: XmlElement,
  id: string,
  start: StartValues,
  assigned: Assigned,
): number {
  const amount = assigned.initially.has(id) ? null : reading.number(element, 'initialAmount');
  if (amount !== null) return amount * names.itemsPerSubstance;
  const size = names.sizeOf.get(id)!;
  return start(id) * (size === null ? 1 : start(size));
}

/** A product that misses a whole number by a few units in its last place is that number: 0.1 × 30 is 3. */
function withoutRoundingError(value: number): number {
  const whole = Math.round(value);
  return Math.abs(value - whole) <= 8 * Number.EPSILON * Math.abs(value) ? whole : value;
}

export function readParameters(
  reading: SbmlReading,
  names: ModelNames,
  units: UnitReading,
  start: StartValues,
  assigned: Assigned,
): ParameterDocument[] {
  return names.list('parameter').map(({ id, element }) => {
    // Beside a rule the stated value plays no part, but it is kept.
    const value = (assigned.rules.has(id) ? reading.number(element, 'value') : null) ?? start(id);
    const unit = units.textOf(element.attributes.get('units'));
    if (!Number.isFinite(value) && !assigned.rules.has(id)) {
      reading.refuse(element, 'missing_value', `${id} has no finite value; set the attribute value.`);
    }
    return {
      id,
      ...named(element),
      value: Number.isFinite(value) ? value : 0,
      ...(unit === undefined ? {} : { unit }),
    };
  });
}

export function named(element: XmlElement): { name?: string } {
  const name = element.attributes.get('name')?.trim();
  return name === undefined || name === '' ? {} : { name };
}
