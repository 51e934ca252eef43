/** Collects the units that a model uses and writes their definitions. */
import { readUnitWords, type BaseUnit } from './unit-words.ts';
import { element, list } from './xml-writing.ts';

export class UnitsToWrite {
  readonly #ids = new Map<string, { id: string; units: BaseUnit[] }>();

  /** The id of the unit that `text` names; undefined when there is no text. A unit not understood is kept by name only. */
  unit(text: string | undefined): string | undefined {
    const words = text?.trim() ?? '';
    if (words === '') return undefined;
    const units = asPureNumbers(readUnitWords(words));
    if (units !== null && units.length === 1 && isPlain(units[0]!)) return units[0]!.kind;
    return this.#define(words, units ?? []);
  }

  /** Time may be in seconds, a multiple of them, or without a dimension (generations, cycles). */
  timeUnit(text: string | undefined): string | undefined {
    const words = text?.trim() ?? '';
    if (words === '') return undefined;
    const units = readUnitWords(words);
    const isTime = units !== null && units.length === 1 && units[0]!.kind === 'second' && units[0]!.exponent === 1;
    return isTime
      ? this.unit(words)
      : this.#define(words, [{ kind: 'dimensionless', exponent: 1, scale: 0, multiplier: 1 }]);
  }

  /** Sizes are volumes, in litres where nothing is said. */
  sizeUnit(text: string | undefined): string | undefined {
    const words = text?.trim() ?? '';
    if (words === '') return 'litre';
    const [only, second] = readUnitWords(words) ?? [];
    const isVolume =
      second === undefined &&
      only !== undefined &&
      only.kind === (only.exponent === 3 ? 'metre' : 'litre') &&
      [1, 3].includes(only.exponent);
    return isVolume ? this.unit(words) : undefined;
  }

  definitions(): string[] {
    return [...this.#ids].map(([name, { id, units }]) =>
      element('unitDefinition', { id, name }, [list('listOfUnits', units.map(unitElement))]),
    );
  }

  #define(words: string, units: BaseUnit[]): string {
    const known = this.#ids.get(words);
    if (known !== undefined) return known.id;
    const id = `unit_${this.#ids.size + 1}`;
    this.#ids.set(words, { id, units });
    return id;
  }
}

/** Molecules are counted, and a count is a pure number (write-sbml.ts). */
const asPureNumbers = (units: BaseUnit[] | null): BaseUnit[] | null =>
  units?.map((unit): BaseUnit => (unit.kind === 'item' ? { ...unit, kind: 'dimensionless' } : unit)) ?? null;

const isPlain = ({ exponent, scale, multiplier }: BaseUnit): boolean =>
  exponent === 1 && scale === 0 && multiplier === 1;

const unitElement = ({ kind, exponent, scale, multiplier }: BaseUnit): string =>
  element('unit', { kind, exponent: String(exponent), scale: String(scale), multiplier: String(multiplier) });
