import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { minimumDegreeOrder } from './minimum-degree.ts';
import { SparseLu } from './sparse-lu.ts';
import { patternOf, positionOf, type SparsePattern } from './sparse-matrix.ts';

const product = (pattern: SparsePattern, values: Float64Array, vector: Float64Array): Float64Array => {
  const result = new Float64Array(pattern.size);
  for (let column = 0; column < pattern.size; column++) {
    for (let p = pattern.columnStart[column]!; p < pattern.columnStart[column + 1]!; p++) {
      result[pattern.rows[p]!]! += values[p]! * vector[column]!;
    }
  }
  return result;
};
const natural = (size: number): Int32Array => Int32Array.from({ length: size }, (_, index) => index);

/** |determinant| by dense elimination with row exchanges. */
const denseDeterminant = ({ size, columnStart, rows }: SparsePattern, values: Float64Array): number => {
  const matrix = Array.from({ length: size }, () => new Array<number>(size).fill(0));
  for (let column = 0; column < size; column++) {
    for (let p = columnStart[column]!; p < columnStart[column + 1]!; p++) matrix[rows[p]!]![column] = values[p]!;
  }
  let determinant = 1;
  for (let k = 0; k < size; k++) {
    matrix.splice(k, size, ...matrix.slice(k).sort((a, b) => Math.abs(b[k]!) - Math.abs(a[k]!)));
    determinant *= Math.abs(matrix[k]![k]!);
    if (determinant === 0) return 0;
    for (let row = k + 1; row < size; row++) {
      const factor = matrix[row]![k]! / matrix[k]![k]!;
      matrix[row] = matrix[row]!.map((entry, column) => entry - factor * matrix[k]![column]!);
    }
  }
  return determinant;
};

/** Any entries, the diagonal sometimes 0, in any pattern of up to 12 columns. */
const systems = fc.integer({ min: 1, max: 12 }).chain((size) => {
  const entry = fc.integer({ min: -1000, max: 1000 }).map((hundredths) => hundredths / 100);
  return fc.record({
    rows: fc.array(fc.array(fc.nat(size - 1), { maxLength: 4 }), { minLength: size, maxLength: size }),
    values: fc.array(fc.oneof({ arbitrary: entry, weight: 9 }, { arbitrary: fc.constant(0), weight: 1 }), {
      minLength: size * size,
      maxLength: size * size,
    }),
    solution: fc.array(entry, { minLength: size, maxLength: size }),
  });
});

describe('SparseLu', () => {
  it('answers a solution whose residual is at round-off, for any pattern and any pivots (200 random systems)', () => {
    let solved = 0;
    fc.assert(
      fc.property(systems, ({ rows, values, solution }) => {
        const pattern = patternOf(rows);
        const matrix = Float64Array.from(pattern.rows, (_, index) => values[index]!);
        const right = product(pattern, matrix, Float64Array.from(solution));
        const factors = new SparseLu(pattern, minimumDegreeOrder(pattern, Infinity)!.columns);
        if (!factors.factorise(matrix)) {
          expect(denseDeterminant(pattern, matrix)).toBeLessThan(1e-10);
          return;
        }
        solved++;
        const found = right.slice();
        factors.solve(found);
        const size = Math.max(...found.map(Math.abs), 1e-300);
        // Backward stable: the residual is small beside the entries times the solution found, even of ill-posed systems.
        product(pattern, matrix, found).forEach((value, row) => {
          expect(Math.abs(value - right[row]!)).toBeLessThanOrEqual(1e-10 * 10 * pattern.size * size);
        });
      }),
      { seed: 20261201, numRuns: 200 },
    );
    expect(solved).toBeGreaterThan(50);
  });

  it('exchanges rows where the diagonal is 0', () => {
    const pattern = patternOf([[1], [0]]);
    const matrix = new Float64Array(4);
    matrix[positionOf(pattern, 0, 1)] = 2;
    matrix[positionOf(pattern, 1, 0)] = 4;
    const factors = new SparseLu(pattern, natural(2));
    expect(factors.factorise(matrix)).toBe(true);
    const right = Float64Array.of(6, 8);
    factors.solve(right);
    expect([...right]).toEqual([2, 3]);
  });

  it('says that a singular matrix and one that is not finite cannot be factorised', () => {
    const pattern = patternOf([[1], [0]]);
    const factors = new SparseLu(pattern, natural(2));
    expect(factors.factorise(Float64Array.of(1, 1, 1, 1))).toBe(false);
    expect(factors.factorise(Float64Array.of(Infinity, 1, 1, 1))).toBe(false);
  });

  it('factorises again with other values on the same pattern', () => {
    const pattern = patternOf([[0], [1]]);
    const factors = new SparseLu(pattern, natural(2));
    for (const scale of [1, 2, 4]) {
      factors.factorise(Float64Array.of(scale, scale));
      const right = Float64Array.of(4, 8);
      factors.solve(right);
      expect([...right]).toEqual([4 / scale, 8 / scale]);
    }
  });
});

describe('minimumDegreeOrder', () => {
  it('orders an arrow without fill: the hub goes last, so the work is linear', () => {
    const size = 200;
    const arrow = patternOf(Array.from({ length: size }, (_, column) => (column === 0 ? natural(size) : [0])));
    const order = minimumDegreeOrder(arrow, 1e6)!;
    // Two multiplications for each vertex but the last; the hub may only go when one leaf is left beside it.
    expect(order.multiplications).toBe(2 * (size - 1));
    expect(order.columns.indexOf(0)).toBeGreaterThanOrEqual(size - 2);
    expect([...order.columns].sort((a, b) => a - b)).toEqual([...natural(size)]);
  });

  it('gives up when the factorisation would exceed the limit', () => {
    const full = patternOf(Array.from({ length: 50 }, () => natural(50)));
    expect(minimumDegreeOrder(full, 10_000)).toBeNull();
    expect(minimumDegreeOrder(full, 100_000)).not.toBeNull();
  });
});
