/**
 * How strongly propensities follow each species: the numbers g_i of the step selection.
 *
 * For mass action of order n with k molecules of species i, da/a ≤ (1 + x/(x−1) + … + x/(x−k+1)) · dx_i/x_i, and n/k such terms
 * share the allowed change ε: g_i = (n/k) · (1 + x/(x−1) + … + x/(x−k+1)). That is g = 1 for first order, 2 or 2 + 1/(x−1) for
 * second, 3, (3/2)(2 + 1/(x−1)) or 3 + 1/(x−1) + 2/(x−2) for third: the table of Cao, Gillespie & Petzold (J. Chem. Phys. 124,
 * 044109, 2006; citation from memory), continued to any order. Where several reactions read a species, the largest g counts.
 *
 * Other laws: the same with the elasticity |∂ ln a / ∂ ln x_i| bounded from the form of the expression, n being the sum over its
 * species and k = 1: products and quotients add elasticities, sums and choices take the largest, powers multiply it; numbers are
 * taken as not negative. Taking a number away from a term doubles its elasticity, which holds from twice that number up. Of all else
 * (differences, exponentials, logarithms, steps, conditions) no bound is known without the state, and `unknownElasticity`
 * stands for it.
 */
import type { PreparedNetwork, PreparedReaction, Term } from '../kernel/prepared-network.ts';

/** Ten times the caution of a first-order law. */
export const unknownElasticity = 10;

/** A reaction of this order that takes `count` molecules of the species at once. */
export interface OrderForm {
  order: number;
  count: number;
}

/** Species that reactions change and some propensity reads, in order, with the forms in which it is read. */
export interface BoundedSpecies {
  species: number;
  forms: OrderForm[];
}

export function boundedSpecies(prepared: PreparedNetwork): BoundedSpecies[] {
  const elasticities = new Elasticities(prepared);
  const forms = new Map<number, Map<number, number>>();
  for (const reaction of prepared.reactions)
    for (const { species, count, order } of formsOf(reaction, elasticities)) {
      const ofSpecies = forms.get(species) ?? new Map<number, number>();
      // Of equal numbers of molecules the highest order has the largest g.
      ofSpecies.set(count, Math.max(order, ofSpecies.get(count) ?? 0));
      forms.set(species, ofSpecies);
    }
  return prepared.changing.flatMap((species) => {
    const ofSpecies = [...(forms.get(species) ?? [])].sort(([a], [b]) => a - b);
    return ofSpecies.length === 0 ? [] : [{ species, forms: ofSpecies.map(([count, order]) => ({ order, count })) }];
  });
}

function formsOf({ law }: PreparedReaction, elasticities: Elasticities): (OrderForm & { species: number })[] {
  if (law.kind === 'massAction') {
    // The constant may follow a rule: its elasticities join the order.
    const ofFactor = elasticities.of(law.factor);
    const order = law.orders.reduce((sum, one) => sum + one.order, 0) + total(ofFactor);
    const read = new Set(law.orders.map(({ species }) => species));
    return [
      ...law.orders.map((one) => ({ species: one.species, count: one.order, order })),
      ...[...ofFactor.keys()].filter((species) => !read.has(species)).map((species) => ({ species, count: 1, order })),
    ];
  }
  const ofLaw = elasticities.of(law.value);
  const order = Math.max(1, total(ofLaw));
  return [...ofLaw.keys()].map((species) => ({ species, count: 1, order }));
}

const total = (elasticities: Map<number, number>): number => [...elasticities.values()].reduce((a, b) => a + b, 0);

/** Bounds of |∂ ln term / ∂ ln x| by species; species that a term does not read are left out. */
class Elasticities {
  readonly #assigned: Map<number, number>[] = [];
  readonly #speciesCount: number;

  constructor({ assigned, speciesCount }: PreparedNetwork) {
    this.#speciesCount = speciesCount;
    for (const term of assigned) this.#assigned.push(this.of(term));
  }

  of(term: Term): Map<number, number> {
    switch (term.kind) {
      case 'number':
      case 'constant':
        return new Map();
      case 'species':
        // What lies behind the species are parameters that changes set: no firing alters them.
        return term.index < this.#speciesCount ? new Map([[term.index, 1]]) : new Map();
      case 'assigned':
        return this.#assigned[term.index]!;
      case 'unary':
        return term.operator === 'negate' ? this.of(term.operand) : unknown(this.of(term.operand));
      case 'binary':
        return this.#binary(term);
      case 'call':
        return this.#call(term);
      case 'piecewise':
        return join(Math.max, [
          ...term.pieces.flatMap(({ value, condition }) => [this.of(value), unknown(this.of(condition))]),
          this.of(term.otherwise),
        ]);
    }
  }

  #binary({ operator, left, right }: Term & { kind: 'binary' }): Map<number, number> {
    const parts = [this.of(left), this.of(right)];
    switch (operator) {
      case 'multiply':
      case 'divide':
        return join((a, b) => a + b, parts);
      case 'add':
        return join(Math.max, parts);
      case 'subtract':
        return parts[1]!.size === 0 ? scaled(parts[0]!, 2) : unknown(join(Math.max, parts));
      case 'power':
        return right.kind === 'number' ? scaled(parts[0]!, Math.abs(right.value)) : unknown(join(Math.max, parts));
      default:
        return unknown(join(Math.max, parts));
    }
  }

  #call({ name, arguments: given }: Term & { kind: 'call' }): Map<number, number> {
    const parts = given.map((argument) => this.of(argument));
    if (name === 'min' || name === 'max' || name === 'abs') return join(Math.max, parts);
    return name === 'sqrt' ? scaled(parts[0]!, 0.5) : unknown(join(Math.max, parts));
  }
}

function join(combine: (a: number, b: number) => number, parts: Map<number, number>[]): Map<number, number> {
  const joined = new Map<number, number>();
  for (const part of parts)
    for (const [species, value] of part) {
      const known = joined.get(species);
      joined.set(species, known === undefined ? value : combine(known, value));
    }
  return joined;
}

const scaled = (elasticities: Map<number, number>, by: number): Map<number, number> =>
  new Map([...elasticities].map(([species, value]) => [species, value * by]));

const unknown = (elasticities: Map<number, number>): Map<number, number> =>
  new Map([...elasticities.keys()].map((species) => [species, unknownElasticity]));
