/** What each id of an SBML model stands for, and the id it bears in the document. */
import { identifierFault, reservedWords } from '@/domain/network/identifiers.ts';
import type { Expression } from '@/domain/network/expression.ts';
import { mapLeaves, symbolsOf } from '@/domain/network/expression-leaves.ts';
import { ownNamespace } from './sbml-names.ts';
import { timeId } from './read-mathml.ts';
import type { SbmlReading } from './sbml-reading.ts';
import { TimeSwitches } from './time-switches.ts';
import type { XmlElement } from './xml-tree.ts';

type Kind = 'compartment' | 'species' | 'parameter' | 'reaction';
const lists: Record<Kind, string> = {
  compartment: 'listOfCompartments',
  species: 'listOfSpecies',
  parameter: 'listOfParameters',
  reaction: 'listOfReactions',
};

export class ModelNames {
  /** Elements by the document's id. */
  readonly elements = new Map<string, XmlElement>();
  /** Size symbol of species whose id means a concentration, null where it means the amount. */
  readonly sizeOf = new Map<string, string | null>();
  readonly compartmentOf = new Map<string, string>();
  readonly timeSwitches: TimeSwitches;
  /** 1, or the factor by which amounts and laws were converted to items. */
  readonly itemsPerSubstance: number;
  /** Name of that factor among the parameters, null when it is 1. */
  readonly factorId: string | null;
  readonly #reading: SbmlReading;
  readonly #ids = new Map<string, string>();
  readonly #lists: Record<Kind, { id: string; element: XmlElement }[]>;
  readonly #boundary = new Set<string>();
  readonly #taken: Set<string>;

  constructor(reading: SbmlReading, model: XmlElement, itemsPerSubstance: number) {
    this.#reading = reading;
    this.itemsPerSubstance = itemsPerSubstance;
    const found = (kind: Kind) =>
      reading.list(model, lists[kind], kind).map((element) => ({ element, written: reading.required(element, 'id') }));
    const all: Record<Kind, { element: XmlElement; written: string }[]> = {
      compartment: found('compartment'),
      species: found('species'),
      parameter: found('parameter'),
      reaction: found('reaction'),
    };
    this.#taken = new Set(Object.values(all).flatMap((rows) => rows.map(({ written }) => written)));
    for (const written of idsElsewhere(reading, model)) this.#taken.add(written);
    this.timeSwitches = new TimeSwitches(reading, (wanted) => this.freeId(wanted));
    const named = (kind: Kind) =>
      all[kind].map(({ element, written }) => ({ element, id: this.#claim(element, written) }));
    this.#lists = {
      compartment: named('compartment'),
      species: named('species'),
      parameter: named('parameter'),
      reaction: named('reaction'),
    };
    for (const { id, element } of this.#lists.species) this.#readSpecies(id, element);
    this.factorId = itemsPerSubstance === 1 ? null : this.freeId('items_per_substance');
  }

  list(kind: Kind): { id: string; element: XmlElement }[] {
    return this.#lists[kind];
  }

  /** The document's id for one written in the file: the same, unless it is a word of the expression language. */
  idOf(written: string): string {
    return this.#ids.get(written) ?? (reservedWords.has(written) ? `${written}_` : written);
  }

  /** A new id like `wanted`. */
  freeId(wanted: string): string {
    let id = wanted;
    for (let number = 2; this.#taken.has(id) || reservedWords.has(id); number++) id = `${wanted}_${number}`;
    this.#taken.add(id);
    return id;
  }

  isBoundary(species: string): boolean {
    return this.#boundary.has(species);
  }

  /** Put there by our own export for species that have none. */
  isImplicit(element: XmlElement | undefined): boolean {
    return element !== undefined && isMarked(element, 'implicit');
  }

  /**
   * An expression of the file in the document's terms: renamed, amounts converted to items, comparisons of the time with
   * constants become switches. Unknown names are refused at `element`. `local` lists the written ids of parameters that
   * shadow others.
   */
  inDocumentTerms(expression: Expression, element: XmlElement, local: ReadonlySet<string> = new Set()): Expression {
    for (const written of symbolsOf(expression)) if (!local.has(written)) this.#refuseUnknown(written, element);
    const own = mapLeaves(expression, (leaf) => {
      if (leaf.kind !== 'symbol') return leaf;
      const symbol: Expression = { kind: 'symbol', id: this.idOf(leaf.id) };
      const isAmount = this.factorId !== null && !local.has(leaf.id) && this.sizeOf.has(symbol.id);
      return isAmount
        ? { kind: 'binary', operator: 'divide', left: symbol, right: { kind: 'symbol', id: this.factorId! } }
        : symbol;
    });
    return this.timeSwitches.putInto(own, element, new Set([...local].map((written) => this.idOf(written))));
  }

  /** A quantity in units of substance (or of substance per time or volume), in items. */
  inItems(expression: Expression): Expression {
    if (this.factorId === null) return expression;
    return { kind: 'binary', operator: 'multiply', left: { kind: 'symbol', id: this.factorId }, right: expression };
  }

  #refuseUnknown(written: string, element: XmlElement): void {
    if (written === timeId) return;
    const kind = this.elements.get(this.idOf(written))?.name;
    if (kind === undefined)
      this.#reading.refuse(element, 'unknown_name', `There is no species, parameter or compartment “${written}”.`);
    if (kind === 'reaction')
      this.#reading.refuse(
        element,
        'reaction_in_expression',
        `“${written}” is a reaction; its rate cannot stand in an expression. Write the law out.`,
      );
  }

  #claim(element: XmlElement, written: string): string {
    const fault = identifierFault(written);
    const id = reservedWords.has(written) ? this.freeId(`${written}_`) : written;
    if (id !== written) {
      this.#reading.warn(
        element,
        'renamed',
        `“${written}” is a word of the expression language here; it was renamed to ${id}.`,
      );
    } else if (fault !== null && written !== '') this.#reading.refuse(element, fault.code, fault.message);
    if (this.elements.has(id) && written !== '') {
      this.#reading.refuse(
        element,
        'duplicate_id',
        `The id “${written}” is already that of ${this.elements.get(id)!.path}.`,
      );
    }
    this.elements.set(id, element);
    this.#ids.set(written, id);
    return id;
  }

  #readSpecies(id: string, element: XmlElement): void {
    const reading = this.#reading;
    const written = reading.required(element, 'compartment');
    const compartment = this.idOf(written);
    const home = this.elements.get(compartment);
    if (home?.name !== 'compartment' && written !== '') {
      reading.refuse(element, 'unknown_compartment', `${id} is in the compartment “${written}”, which is not there.`);
    } else this.compartmentOf.set(id, compartment);
    const flat = home !== undefined && reading.number(home, 'spatialDimensions') === 0;
    const meansAmount = flat || reading.boolean(element, 'hasOnlySubstanceUnits', false);
    this.sizeOf.set(id, meansAmount ? null : compartment);
    if (element.attributes.has('conversionFactor')) {
      reading.refuse(
        element,
        'conversion_factor',
        `${id} has a conversionFactor, which is not supported; put the factor into the stoichiometry or the law.`,
      );
    }
    if (reading.boolean(element, 'boundaryCondition', false) || reading.boolean(element, 'constant', false))
      this.#boundary.add(id);
  }
}

/** Ids of events and of parameters inside laws, which new names must not meet. */
function idsElsewhere(reading: SbmlReading, model: XmlElement): string[] {
  const inside = (parent: XmlElement, ...lists: string[]): XmlElement[] =>
    parent.children.filter(({ name }) => lists.includes(name)).flatMap(({ children }) => children);
  const laws = inside(model, 'listOfReactions').flatMap((reaction) => reading.child(reaction, 'kineticLaw') ?? []);
  const locals = laws.flatMap((law) => inside(law, 'listOfLocalParameters', 'listOfParameters'));
  return [...locals, ...inside(model, 'listOfEvents')].flatMap(({ attributes }) => attributes.get('id')?.trim() ?? []);
}

/** Whether the annotation of `element` bears our own mark `name`. */
export function isMarked(element: XmlElement, name: string): boolean {
  const annotation = element.children.find((child) => child.name === 'annotation');
  return annotation?.children.some((child) => child.namespace === ownNamespace && child.name === name) ?? false;
}
