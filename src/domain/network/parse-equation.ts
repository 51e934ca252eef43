/** Reads a chemical equation as typed: species, integers, + and an arrow, such as `2 A + B → C` or `∅ -> X`. */
import { limits } from '../limits.ts';
import type { TextFault } from './expression-tokens.ts';

/** `count` items of a species; `position` is where it first stands in the text, counted from 0. */
export interface EquationTerm {
  species: string;
  count: number;
  position: number;
}

export interface Equation {
  /** Each species once per side, in order of first mention. */
  reactants: EquationTerm[];
  products: EquationTerm[];
  /** Written with ⇌: two reactions in one line, to be split before it can be stored without a problem. */
  reversible: boolean;
}

export type ParsedEquation = { ok: true; equation: Equation } | { ok: false; fault: TextFault };

const arrow = /<-+>|<=+>|⇌|⇄|↔|→|⟶|-+>|=>/g;
const reversibleArrow = /^[<⇌⇄↔]/;
const nothing = /^(?:∅|Ø|ø|0)$/;
const termPattern = /^(\d+(?:\.\d*)?|\.\d+)?(\s*)([A-Za-z_][A-Za-z0-9_]*)?$/;

class Fault extends Error {
  constructor(readonly fault: TextFault) {
    super(fault.message);
  }
}
const fail = (position: number, code: string, message: string): never => {
  throw new Fault({ position, code, message });
};

/** The two sides of `text`, or the first fault with its character position and advice. */
export function parseEquation(text: string): ParsedEquation {
  try {
    return { ok: true, equation: read(text) };
  } catch (error) {
    if (error instanceof Fault) return { ok: false, fault: error.fault };
    throw error;
  }
}

function read(text: string): Equation {
  if (text.trim() === '') fail(0, 'empty_equation', 'An equation is needed, such as A + B → C.');
  if (text.length > limits.expressionCharacters) {
    fail(
      limits.expressionCharacters,
      'equation_too_long',
      `An equation has at most ${limits.expressionCharacters} characters.`,
    );
  }
  const arrows = [...text.matchAll(arrow)];
  const [first, second] = arrows;
  if (first === undefined) failWithoutArrow(text);
  if (second !== undefined)
    fail(second.index, 'two_arrows', 'One arrow to a reaction; give each step a row of its own.');
  const from = first!.index + first![0].length;
  const reactants = readSide(text.slice(0, first!.index), 0);
  const products = readSide(text.slice(from), from);
  if (reactants.length === 0 && products.length === 0)
    fail(0, 'empty_equation', 'Nothing becomes nothing; name a species on at least one side.');
  return { reactants, products, reversible: reversibleArrow.test(first![0]) };
}

function failWithoutArrow(text: string): void {
  const backwards = /<-+|←|⟵/.exec(text);
  if (backwards !== null)
    fail(backwards.index, 'backward_arrow', 'Write the reaction from left to right: reactants → products.');
  const equals = text.indexOf('=');
  if (equals >= 0) fail(equals, 'missing_arrow', 'Write an arrow between the sides: → or ->.');
  fail(text.length, 'missing_arrow', 'An arrow is missing: reactants → products (-> will do).');
}

function readSide(side: string, offset: number): EquationTerm[] {
  if (side.trim() === '' || nothing.test(side.trim())) return [];
  const terms = new Map<string, EquationTerm>();
  let position = offset;
  for (const part of side.split('+')) {
    const start = position + (part.length - part.trimStart().length);
    position += part.length + 1;
    const { species, count } = readTerm(part.trim(), start);
    const known = terms.get(species);
    if (known === undefined) terms.set(species, { species, count, position: start });
    else known.count += count;
  }
  for (const { species, count, position: start } of terms.values()) {
    if (count > limits.stoichiometry) {
      fail(
        start,
        'stoichiometry_too_large',
        `${count} of ${species}: a side holds at most ${limits.stoichiometry} of a species.`,
      );
    }
  }
  return [...terms.values()];
}

function readTerm(term: string, position: number): { species: string; count: number } {
  if (term === '') fail(position, 'missing_species', 'A species is missing beside +.');
  if (nothing.test(term)) fail(position, 'nothing_among_species', '∅ stands alone on its side.');
  const match = termPattern.exec(term);
  if (match === null) return fail(position, 'unexpected_in_equation', unexpected(term));
  const [, digits, , species] = match;
  if (species === undefined) return fail(position, 'missing_species', `A species is missing after ${digits}.`);
  const count = digits === undefined ? 1 : Number(digits);
  if (!Number.isInteger(count) || (digits !== undefined && digits.includes('.'))) {
    fail(
      position,
      'non_integer_stoichiometry',
      `${digits} ${species}: whole numbers only, since molecules react one by one. Multiply the equation until all are whole.`,
    );
  }
  if (count === 0) fail(position, 'zero_stoichiometry', `0 ${species} says nothing; leave it out.`);
  return { species, count };
}

function unexpected(term: string): string {
  if (/^-/.test(term) || /^−/.test(term))
    return `“${term}”: stoichiometry is never negative; put the species on the other side.`;
  if (/[*×·]/.test(term)) return `“${term}”: write the number before the species without a sign, as in 2 A.`;
  if (/\s/.test(term)) return `“${term}”: write + between species; an id has no spaces.`;
  return `“${term}” is not a species: an equation holds only species, whole numbers, + and an arrow.`;
}
