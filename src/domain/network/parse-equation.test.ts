import { describe, expect, it } from 'vitest';
import { parseEquation } from './parse-equation.ts';
import { printEquation, splitReversibleEquation } from './print-equation.ts';

const read = (text: string) => {
  const result = parseEquation(text);
  if (!result.ok) throw new Error(`${text}: ${result.fault.message}`);
  return result.equation;
};
const faultOf = (text: string) => {
  const result = parseEquation(text);
  if (result.ok) throw new Error(`${text} was read`);
  return result.fault;
};

describe('parseEquation', () => {
  it.each([
    ['2 A + B → C', '2 A + B → C'],
    ['2A+B->C', '2 A + B → C'],
    ['∅ -> X', '∅ → X'],
    ['0 --> X', '∅ → X'],
    ['-> X', '∅ → X'],
    ['A ->', 'A → ∅'],
    ['A → ∅', 'A → ∅'],
    ['A + A -> B', '2 A → B'],
    ['E + S ⇌ ES', 'E + S ⇌ ES'],
    ['E + S <-> ES', 'E + S ⇌ ES'],
    ['E + S <=> ES', 'E + S ⇌ ES'],
    ['A => B', 'A → B'],
    ['m -> m + p', 'm → m + p'],
    ['  10 _x1 ->  3 Y_2 ', '10 _x1 → 3 Y_2'],
  ])('reads “%s” as %s', (text, printed) => {
    expect(printEquation(read(text))).toBe(printed);
  });

  it('reads its own print back to the same', () => {
    for (const text of ['2 A + B → C', '∅ → X', 'A → ∅', 'A + 3 B ⇌ A + C'])
      expect(printEquation(read(text))).toBe(text);
  });

  it('splits a reversible equation into two', () => {
    expect(splitReversibleEquation(read('2 A ⇌ A2'))).toEqual(['2 A → A2', 'A2 → 2 A']);
  });

  it.each([
    ['', 0, 'empty_equation'],
    ['->', 0, 'empty_equation'],
    ['∅ → ∅', 0, 'empty_equation'],
    ['A + B', 5, 'missing_arrow'],
    ['A = B', 2, 'missing_arrow'],
    ['A <- B', 2, 'backward_arrow'],
    ['A -> B -> C', 7, 'two_arrows'],
    ['1.5 A -> B', 0, 'non_integer_stoichiometry'],
    ['A -> 2.0 B', 5, 'non_integer_stoichiometry'],
    ['0 A -> B', 0, 'zero_stoichiometry'],
    ['A -> 1001 B', 5, 'stoichiometry_too_large'],
    ['-2 A -> B', 0, 'unexpected_in_equation'],
    ['A + -> B', 4, 'missing_species'],
    ['2 -> B', 0, 'missing_species'],
    ['A + ∅ -> B', 4, 'nothing_among_species'],
    ['A B -> C', 0, 'unexpected_in_equation'],
    ['2*A -> C', 0, 'unexpected_in_equation'],
    ['A, k -> C', 0, 'unexpected_in_equation'],
    ['A -> B ; k', 5, 'unexpected_in_equation'],
  ])('refuses “%s” at character %i as %s', (text, position, code) => {
    expect(faultOf(text)).toMatchObject({ position, code });
  });
});
