/** Reads unit definitions: as words for the document, and how many items one unit of substance is. */
import type { SbmlReading } from './sbml-reading.ts';
import type { XmlElement } from './xml-tree.ts';

export interface UnitReading {
  /** Words for a unit, such as “1/s”. */
  textOf: (unit: string | undefined) => string | undefined;
  /** Items per unit of substance: 1 for items and for what is not stated. Null when the unit is no amount. */
  itemsPer: (unit: string) => number | null;
}

interface BaseUnit {
  kind: string;
  exponent: number;
  scale: number;
  multiplier: number;
}

/** The exact value of the SI since 2019 (BIPM, SI Brochure, 9th edition; from memory). */
export const itemsPerMole = 6.02214076e23;

const symbols: Record<string, string> = {
  second: 's',
  litre: 'L',
  liter: 'L',
  metre: 'm',
  meter: 'm',
  mole: 'mol',
  gram: 'g',
  kilogram: 'kg',
  item: 'item',
  dimensionless: '1',
};
const prefixes: Record<number, string> = { 0: '', 3: 'k', [-3]: 'm', [-6]: 'µ', [-9]: 'n', [-12]: 'p', [-15]: 'f' };
const longTimes: Record<number, string> = { 60: 'min', 3600: 'h', 86400: 'day' };

export function readUnits(reading: SbmlReading, model: XmlElement): UnitReading {
  const definitions = new Map<string, { name: string | undefined; units: BaseUnit[] }>();
  for (const definition of reading.list(model, 'listOfUnitDefinitions', 'unitDefinition')) {
    const units = reading.list(definition, 'listOfUnits', 'unit').map((unit): BaseUnit => ({
      kind: reading.required(unit, 'kind'),
      exponent: reading.number(unit, 'exponent') ?? 1,
      scale: reading.number(unit, 'scale') ?? 0,
      multiplier: reading.number(unit, 'multiplier') ?? 1,
    }));
    definitions.set(reading.required(definition, 'id'), { name: definition.attributes.get('name'), units });
  }
  const unitsOf = (unit: string): BaseUnit[] =>
    definitions.get(unit)?.units ?? [{ kind: unit, exponent: 1, scale: 0, multiplier: 1 }];
  return {
    textOf: (unit) =>
      unit === undefined ? undefined : (definitions.get(unit)?.name ?? wordsFor(unitsOf(unit)) ?? unit),
    itemsPer: (unit) => itemsIn(unitsOf(unit)),
  };
}

function itemsIn(units: BaseUnit[]): number | null {
  const [only, second] = units.filter(({ kind }) => kind !== 'dimensionless' || units.length === 1);
  if (only === undefined || second !== undefined || only.exponent !== 1) return null;
  const factor = only.multiplier * 10 ** only.scale;
  if (only.kind === 'item' || only.kind === 'dimensionless') return factor;
  return only.kind === 'mole' ? factor * itemsPerMole : null;
}

/** “1/s”, “µL”, “L/(mol·s)”; null for a unit without a short form. */
function wordsFor(units: BaseUnit[]): string | null {
  const above: string[] = [];
  const below: string[] = [];
  for (const { kind, exponent, scale, multiplier } of units) {
    const long = kind === 'second' && scale === 0 ? longTimes[multiplier] : undefined;
    const symbol =
      long ??
      (multiplier === 1 && symbols[kind] !== undefined && prefixes[scale] !== undefined
        ? `${prefixes[scale]}${symbols[kind]}`
        : null);
    if (symbol === null || !Number.isInteger(exponent)) return null;
    const power = Math.abs(exponent);
    if (power > 0 && symbol !== '1') (exponent > 0 ? above : below).push(power === 1 ? symbol : `${symbol}^${power}`);
  }
  if (below.length === 0) return above.join('·') || '1';
  return `${above.join('·') || '1'}/${below.length === 1 ? below[0] : `(${below.join('·')})`}`;
}
