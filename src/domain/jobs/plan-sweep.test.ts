import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { limits } from '../limits.ts';
import { planSweep, type SweepRequest } from './plan-sweep.ts';
import { overridesAt, pointWords, type SweepTarget } from './sweep.ts';

const k: SweepTarget = { kind: 'parameter', id: 'k' };
const a: SweepTarget = { kind: 'initial_count', id: 'A' };
const dose: SweepTarget = { kind: 'change_time', id: 'dose' };
const never = () => {
  throw new Error('nothing is drawn');
};
function planned(request: SweepRequest, uniform: () => number = never) {
  const outcome = planSweep(request, uniform);
  if (!outcome.ok) throw new Error(JSON.stringify(outcome.faults));
  return outcome.sweep;
}
const codesOf = (request: SweepRequest): string[] => {
  const outcome = planSweep(request, () => 0.5);
  return outcome.ok ? [] : outcome.faults.map(({ code }) => code);
};

describe('a grid', () => {
  it('has every combination, the last axis fastest', () => {
    const sweep = planned({
      kind: 'grid',
      axes: [
        { target: k, values: [0.1, 0.2] },
        { target: a, values: [5, 6, 7] },
      ],
    });
    expect(sweep.values).toEqual([
      [0.1, 5],
      [0.1, 6],
      [0.1, 7],
      [0.2, 5],
      [0.2, 6],
      [0.2, 7],
    ]);
  });

  it('spaces values linearly and by equal ratios, ends exact, counts whole', () => {
    const spaced = (target: SweepTarget, from: number, to: number, count: number, scale: 'linear' | 'log') =>
      planned({ kind: 'grid', axes: [{ target, spacing: { from, to, count, scale } }] }).values.flat();
    expect(spaced(dose, 0, 3, 4, 'linear')).toEqual([0, 1, 2, 3]);
    const decades = spaced(k, 0.001, 10, 5, 'log');
    expect([decades[0], decades.at(-1)]).toEqual([0.001, 10]);
    decades.slice(1).forEach((value, i) => expect(value / decades[i]!).toBeCloseTo(10, 10));
    expect(spaced(a, 1, 10, 4, 'linear')).toEqual([1, 4, 7, 10]);
    expect(spaced(a, 1, 100, 4, 'log')).toEqual([1, 5, 22, 100]);
  });
});

describe('a Latin hypercube', () => {
  it('has one point in each part of each axis, whatever is drawn', () => {
    fc.assert(
      fc.property(
        fc.integer({ min: 1, max: 60 }),
        fc.array(
          fc.nat(999).map((n) => n / 1_000),
          { minLength: 1, maxLength: 50 },
        ),
        (count, draws) => {
          let drawn = 0;
          const { values } = planned(
            {
              kind: 'latin_hypercube',
              count,
              axes: [
                { target: k, from: 2, to: 4, scale: 'linear' },
                { target: dose, from: 0.01, to: 100, scale: 'log' },
              ],
            },
            () => draws[drawn++ % draws.length]!,
          );
          const parts = (part: (row: number[]) => number) =>
            values.map((row) => Math.floor(part(row) * count + 1e-9)).sort((x, y) => x - y);
          const each = Array.from({ length: count }, (_, i) => i);
          expect(parts(([x]) => (x! - 2) / 2)).toEqual(each);
          expect(parts(([, y]) => Math.log(y! / 0.01) / Math.log(1e4))).toEqual(each);
        },
      ),
      { seed: 20261201, numRuns: 200 },
    );
  });
});

describe('what cannot be a sweep', () => {
  it('is refused by name', () => {
    expect(codesOf({ kind: 'list', targets: [k], values: [] })).toEqual(['no_points']);
    expect(codesOf({ kind: 'list', targets: [k, a], values: [[1, 2], [1]] })).toEqual(['ragged']);
    expect(codesOf({ kind: 'list', targets: [k, k], values: [[1, 2]] })).toEqual(['repeated_target']);
    expect(codesOf({ kind: 'list', targets: [k], values: [[1], [2], [1]] })).toEqual(['repeated_point']);
    const axis = (from: number, to: number, scale: 'linear' | 'log', count = 3) =>
      codesOf({ kind: 'grid', axes: [{ target: k, spacing: { from, to, count, scale } }] });
    expect(axis(2, 1, 'linear')).toEqual(['empty_range']);
    expect(axis(0, 1, 'log')).toEqual(['not_positive']);
    expect(axis(0, 1, 'linear', limits.sweepPoints + 1)).toEqual(['too_many_points']);
    // Whole counts between 1 and 2 are two, not five.
    expect(
      codesOf({ kind: 'grid', axes: [{ target: a, spacing: { from: 1, to: 2, count: 5, scale: 'linear' } }] }),
    ).toEqual(['repeated_point']);
  });
});

describe('a point', () => {
  it('stands over the scenario, and says itself in words', () => {
    const sweep = planned({ kind: 'list', targets: [k, a, dose], values: [[1, 2, 3]] });
    const overrides = { parameters: { k: 9, other: 8 }, initialCounts: { B: 7 } };
    expect(overridesAt({ overrides, sweep }, 0)).toEqual({
      parameters: { k: 1, other: 8 },
      initialCounts: { A: 2, B: 7 },
      changeTimes: { dose: 3 },
    });
    expect(overridesAt({ overrides }, 0)).toBe(overrides);
    expect(pointWords(sweep, 0)).toBe('k = 1, A = 2 at the start, dose at time 3');
  });
});
