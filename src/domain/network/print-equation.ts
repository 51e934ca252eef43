/** Writes a chemical equation the one way the product shows it, and splits a reversible one into its two directions. */
import type { Equation, EquationTerm } from './parse-equation.ts';

const side = (terms: EquationTerm[]): string =>
  terms.length === 0
    ? '∅'
    : terms.map(({ species, count }) => (count === 1 ? species : `${count} ${species}`)).join(' + ');

/** For example `2 A + B → C`, `∅ → X`, `A ⇌ B`. */
export function printEquation(equation: Pick<Equation, 'reactants' | 'products' | 'reversible'>): string {
  return `${side(equation.reactants)} ${equation.reversible ? '⇌' : '→'} ${side(equation.products)}`;
}

/** The forward and the backward equation of a reversible one, as text for two rows. */
export function splitReversibleEquation(equation: Equation): [forward: string, backward: string] {
  const { reactants, products } = equation;
  return [
    printEquation({ reactants, products, reversible: false }),
    printEquation({ reactants: products, products: reactants, reversible: false }),
  ];
}
