import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import type { NetworkDocument } from '@/domain/network/document.ts';
import { resolveNetwork } from '@/domain/network/resolve-network.ts';
import { decayingDimerising } from '@tests/factories/networks.ts';
import { RateEquations } from './rate-equations.ts';
import { fadeCount } from './reaction-rate.ts';

const equationsOf = (document: NetworkDocument): RateEquations => {
  const outcome = resolveNetwork(document);
  if (!outcome.ok) throw new Error(JSON.stringify(outcome.problems));
  return new RateEquations(outcome.network);
};
const slopeAt = (equations: RateEquations, state: number[]): number[] => {
  const derivative = new Float64Array(equations.size);
  expect(equations.evaluate(Float64Array.from(state), derivative)).toBe(-1);
  return [...derivative];
};
const denseJacobian = (equations: RateEquations, state: number[]): number[][] => {
  equations.evaluateJacobian(Float64Array.from(state));
  const { pattern, values } = equations.jacobian!;
  const dense = state.map(() => state.map(() => 0));
  for (let column = 0; column < pattern.size; column++) {
    for (let p = pattern.columnStart[column]!; p < pattern.columnStart[column + 1]!; p++) {
      dense[pattern.rows[p]!]![column] = values[p]!;
    }
  }
  return dense;
};
/** ∂(dxᵢ/dt)/∂x_column by central differences, extrapolated from two widths (Richardson). */
const differenceColumn = (equations: RateEquations, state: number[], column: number): number[] => {
  const central = (width: number): number[] => {
    const [above, below] = [1, -1].map((sign) =>
      slopeAt(
        equations,
        state.map((count, species) => (species === column ? count + sign * width : count)),
      ),
    );
    return above!.map((value, row) => (value - below![row]!) / (2 * width));
  };
  const width = state[column]! * 1e-3;
  const [coarse, fine] = [central(width), central(width / 2)];
  return fine.map((value, row) => (4 * value - coarse[row]!) / 3);
};
const single = (expression: string, equation = 'A → ∅'): NetworkDocument => ({
  species: ['A', 'B'].map((id) => ({ id, initialCount: 10 })),
  reactions: [{ id: 'r', equation, rateLaw: { kind: 'expression', expression } }],
});

describe('RateEquations', () => {
  it('takes mass action in the large-count limit, c·x²/2 for 2A → …, at the decaying-dimerising start', () => {
    // The system: Gillespie 2001, J. Chem. Phys. 115:1716 (citation from memory); worked out by hand from its four laws.
    const [x1, x2] = [4150, 39565];
    const expected = [-x1 - 2 * 0.001 * x1 * x1 + 2 * 0.5 * x2, 0.001 * x1 * x1 - 0.5 * x2 - 0.04 * x2, 0.04 * x2];
    slopeAt(new RateEquations(decayingDimerising()), [x1, x2, 3445]).forEach((value, species) => {
      expect(value).toBeCloseTo(expected[species]!, 8);
    });
  });

  it('lets a reaction rest whose reactants are at or below 0, whatever its law', () => {
    for (const expression of ['3', '2 * A', '5 + A * B', 'A / (A + B)', 'A^2 / (A^2 + B^2)']) {
      const equations = equationsOf(single(expression));
      for (const count of [0, -1e-9, -5]) {
        expect(slopeAt(equations, [count, 0])).toEqual([0, 0]);
        expect(slopeAt(equations, [count, 3])).toEqual([0, 0]);
      }
    }
    const square = equationsOf({
      species: [{ id: 'A', initialCount: 1 }],
      reactions: [{ id: 'r', equation: '2 A → ∅', rateLaw: { kind: 'massAction', constant: '1' } }],
    });
    expect(slopeAt(square, [-3])).toEqual([0]);
  });

  it('keeps a law verbatim that has its reactant as a factor, down to the last trace of it', () => {
    const equations = equationsOf(single('4 * A / (2 + A)'));
    for (const count of [1e-12, 1e-4, 1, 50])
      expect(slopeAt(equations, [count, 0])[0]).toBe((-4 * count) / (2 + count));
  });

  it('fades a law that stays positive without its reactant over the last thousandth of a molecule, and nowhere else', () => {
    const equations = equationsOf(single('3 + B'));
    expect(slopeAt(equations, [fadeCount, 2])[0]).toBe(-5);
    expect(slopeAt(equations, [10, 2])[0]).toBe(-5);
    expect(slopeAt(equations, [fadeCount / 4, 2])[0]).toBeCloseTo(-5 / 4, 14);
    expect(denseJacobian(equations, [fadeCount / 4, 2])[0]![0]).toBeCloseTo(-5 / fadeCount, 6);
  });

  it('keeps boundary species where they are and feels them all the same', () => {
    const equations = equationsOf({
      species: [
        { id: 'A', initialCount: 10 },
        { id: 'B', initialCount: 3, boundary: true },
      ],
      reactions: [{ id: 'r', equation: 'A + B → 2 B', rateLaw: { kind: 'massAction', constant: '0.5' } }],
    });
    expect(slopeAt(equations, [10, 3])).toEqual([-15, 0]);
    expect(denseJacobian(equations, [10, 3])).toEqual([
      [-1.5, 0],
      [0, 0],
    ]);
  });

  it('names the reaction whose law has no finite value', () => {
    const equations = equationsOf(single('ln(B) * 0 + 1', '∅ → A'));
    expect(equations.evaluate(Float64Array.of(1, 0), new Float64Array(2))).toBe(0);
  });

  it('puts 0 in the Jacobian where a slope is infinite, and never NaN', () => {
    const equations = equationsOf(single('sqrt(A)', '∅ → B'));
    expect(denseJacobian(equations, [0, 0]).flat().every(Number.isFinite)).toBe(true);
  });
});

/** Smooth laws over A, B, C, the parameter p, and the assigned q = p·A + B and w = q² / (1 + C). */
const lawOf = (coefficient: number): string[] => [
  `${coefficient} * A`,
  `${coefficient} * A * B / (p + A)`,
  `${coefficient} * B^2 / (p^2 + B^2)`,
  `${coefficient} * exp(-C / 50)`,
  `${coefficient} * q`,
  `${coefficient} * sqrt(A * C) * ln(2 + w)`,
  `${coefficient} * A^1.5 / (1 + w)`,
  `${coefficient} * log10(10 + q) * abs(B)`,
  `${coefficient} * 1.02^(A / 10)`,
  `piecewise(${coefficient} * A, C > 0, B)`,
  `${coefficient} * min(A, 10000) * max(B, 0.001)`,
];
const equation = fc
  .tuple(
    fc.subarray(['A', 'B', 'C', '2 A', '3 B'], { maxLength: 2 }),
    fc.subarray(['A', '2 B', 'C', 'D'], { maxLength: 2 }),
  )
  .filter(([left, right]) => left.length + right.length > 0)
  .map((sides) => sides.map((side) => (side.length === 0 ? '∅' : side.join(' + '))).join(' → '));
const reaction = fc.record({
  equation,
  constant: fc.integer({ min: 1, max: 500 }).map((hundredths) => hundredths / 100),
  law: fc.nat(lawOf(1).length),
});
const networks = fc.record({
  reactions: fc.array(reaction, { minLength: 1, maxLength: 6 }),
  state: fc.array(fc.integer({ min: 1, max: 300 }), { minLength: 4, maxLength: 4 }),
  boundary: fc.boolean(),
});

describe('the Jacobian', () => {
  it('agrees with central differences on 300 random networks with rules and a boundary species', () => {
    let compared = 0;
    fc.assert(
      fc.property(networks, ({ reactions, state, boundary }) => {
        const equations = equationsOf({
          species: ['A', 'B', 'C', 'D'].map((id, index) => ({
            id,
            initialCount: state[index]!,
            boundary: boundary && id === 'C',
          })),
          parameters: ['p', 'q', 'w'].map((id) => ({ id, value: 7 })),
          assignmentRules: [
            { variable: 'w', expression: 'q^2 / (1 + C)' },
            { variable: 'q', expression: 'p * A + B' },
          ],
          reactions: reactions.map(({ equation: text, constant, law }, index) => ({
            id: `r${index}`,
            equation: text,
            rateLaw:
              law === lawOf(1).length
                ? { kind: 'massAction' as const, constant: String(constant) }
                : { kind: 'expression' as const, expression: lawOf(constant)[law]! },
          })),
        });
        const dense = denseJacobian(equations, state);
        const free = state.map((_, species) => !(boundary && species === 2));
        state.forEach((_, column) => {
          if (!free[column]) return;
          const differences = differenceColumn(equations, state, column);
          const scale = Math.max(...slopeAt(equations, state).map(Math.abs), 1) / state[column]!;
          differences.forEach((value, row) => {
            compared++;
            expect(Math.abs(dense[row]![column]! - value)).toBeLessThan(1e-6 * Math.max(Math.abs(value), scale));
          });
        });
      }),
      { seed: 20261201, numRuns: 300 },
    );
    expect(compared).toBeGreaterThan(4_000);
  });
});
