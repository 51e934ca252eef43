/** Tau-leaping's step selection, critical reactions and orders against the published formulas (citations from memory). */
import { describe, expect, it } from 'vitest';
import type { Expression } from '@/domain/network/expression.ts';
import type { ResolvedNetwork } from '@/domain/network/resolved.ts';
import { stateValues } from '@/engine/exact/changes.ts';
import { evaluatePropensity } from '@/engine/kernel/evaluate.ts';
import { constantValues, prepareNetwork } from '@/engine/kernel/prepare-network.ts';
import { isCritical } from '@/engine/leaping/critical-reactions.ts';
import { boundedSpecies, unknownElasticity } from '@/engine/leaping/reaction-orders.ts';
import { highestOrder, selectStep } from '@/engine/leaping/step-selection.ts';
import { binary, decayingDimerising, network, number, parameter, species } from '@tests/factories/networks.ts';

function stepOf(model: ResolvedNetwork, epsilon: number) {
  const prepared = prepareNetwork(model);
  const counts = model.species.map(({ initialCount }) => initialCount);
  const state = stateValues(prepared, constantValues(prepared, model), counts);
  const propensities = prepared.reactions.map((reaction) => evaluatePropensity(reaction, state));
  const total = propensities.reduce((a, b) => a + b, 0);
  return { total, ...selectStep(prepared, boundedSpecies(prepared), counts, propensities, epsilon) };
}

describe('selectStep', () => {
  it('gives a0 42733.45 and τ 0.025461992 at the start of the decaying-dimerising set, ε 0.03 (Cao, Gillespie & Petzold 2006)', () => {
    const { total, length, leapingTotal } = stepOf(decayingDimerising(), 0.03);
    expect(total).toBeCloseTo(42733.45, 2);
    expect(length).toBeCloseTo(0.025461992, 9);
    expect(leapingTotal).toBe(total);
  });

  it('is bounded by the mean change or by its variance, whichever is nearer (decay of 10⁴, hand-derived)', () => {
    const decay = (count: number) => network({ counts: { X: count }, reactions: [{ consumes: { X: 1 }, rate: 2 }] });
    // max(0.1 · 10⁴, 1) / (2 · 10⁴) = 0.05; its square / (2 · 10⁴) = 50.
    expect(stepOf(decay(1e4), 0.1).length).toBeCloseTo(0.05, 12);
    // In and out in balance: mean 0, variance 2 · 10⁴ per time, allowed change 100.
    const balanced = network({
      counts: { X: 1e4 },
      reactions: [
        { produces: { X: 1 }, rate: 1e4 },
        { consumes: { X: 1 }, rate: 1 },
      ],
    });
    expect(stepOf(balanced, 0.01).length).toBeCloseTo(100 ** 2 / 2e4, 12);
  });

  it('allows a change of one where ε x / g is less', () => {
    const model = network({ counts: { X: 20 }, reactions: [{ consumes: { X: 1 }, rate: 1 }] });
    expect(stepOf(model, 0.03).length).toBeCloseTo(1 / 20, 12);
  });

  it('is not bounded by species that no propensity reads', () => {
    const model = network({ counts: { P: 0 }, reactions: [{ produces: { P: 1 }, rate: 8 }] });
    expect(stepOf(model, 0.03).length).toBe(2 ** 50 / 8);
  });

  it('is infinite where no reaction leaps', () => {
    const model = network({ counts: { X: 9 }, reactions: [{ consumes: { X: 1 }, rate: 1 }] });
    expect(stepOf(model, 0.03)).toMatchObject({ length: Infinity, leapingTotal: 0, criticalTotal: 9 });
  });
});

describe('isCritical (Cao, Gillespie & Petzold 2005)', () => {
  const { reactions } = prepareNetwork(
    network({
      counts: { A: 0, B: 0, C: 0 },
      reactions: [
        { consumes: { A: 1 }, produces: { C: 1 }, rate: 1 },
        { consumes: { A: 2, B: 1 }, rate: 1 },
        { consumes: { A: 1 }, produces: { A: 1, B: 1 }, rate: 1 },
      ],
    }),
  );
  const critical = (counts: number[]): boolean[] => reactions.map((reaction) => isCritical(reaction, counts));
  it('is one that could use up a reactant in fewer than ten firings; catalysts do not count', () => {
    expect(critical([9, 100, 0])).toEqual([true, true, false]);
    expect(critical([10, 100, 0])).toEqual([false, true, false]);
    expect(critical([19, 100, 0])).toEqual([false, true, false]);
    expect(critical([20, 100, 0])).toEqual([false, false, false]);
    expect(critical([20, 9, 0])).toEqual([false, true, false]);
  });
});

describe('boundedSpecies and highestOrder', () => {
  const g = (model: ResolvedNetwork, index: number, count: number): number =>
    highestOrder(boundedSpecies(prepareNetwork(model)).find((one) => one.species === index)!.forms, count);
  const massAction = (consumes: Record<string, number>) =>
    network({ counts: { X: 0, Y: 0, Z: 0 }, reactions: [{ consumes, rate: 1 }] });

  it.each([
    ['X', { X: 1 }, (_: number) => 1],
    ['X + Y', { X: 1, Y: 1 }, () => 2],
    ['2X', { X: 2 }, (x: number) => 2 + 1 / (x - 1)],
    ['X + Y + Z', { X: 1, Y: 1, Z: 1 }, () => 3],
    ['2X + Y', { X: 2, Y: 1 }, (x: number) => (3 / 2) * (2 + 1 / (x - 1))],
    ['3X', { X: 3 }, (x: number) => 3 + 1 / (x - 1) + 2 / (x - 2)],
  ])('%s has the g of the published table', (_, consumes, published) => {
    for (const count of [4, 17, 1000]) expect(g(massAction(consumes), 0, count)).toBeCloseTo(published(count), 12);
  });

  it('takes the largest of several reactions, and is infinite where a molecule is missing', () => {
    const model = network({
      counts: { X: 0 },
      reactions: [
        { consumes: { X: 1 }, rate: 1 },
        { consumes: { X: 2 }, rate: 1 },
      ],
    });
    expect(g(model, 0, 5)).toBeCloseTo(2.25, 12);
    expect(g(model, 0, 1)).toBe(Infinity);
    expect(g(model, 0, 0)).toBe(1);
  });

  const law = (rate: Expression, assignments: ResolvedNetwork['assignments'] = []) =>
    network({
      counts: { X: 0, Y: 0 },
      parameters: { K: 5, ruled: 0 },
      assignments,
      reactions: [{ consumes: { X: 1 }, produces: { Y: 1 }, rate }],
    });
  const saturating = binary('divide', species(0), binary('add', parameter(0), species(0)));
  const squared = binary('power', species(0), number(2));
  it.each([
    ['saturation, elasticity 1 at most in value', saturating, 2],
    ['a product of two species', binary('multiply', species(0), species(1)), 2],
    ['a square over its saturation', binary('divide', squared, binary('add', number(1), squared)), 4],
    ['x (x − 1)', binary('multiply', species(0), binary('subtract', species(0), number(1))), 3],
    ['a difference of two species', binary('subtract', species(0), species(1)), 2 * unknownElasticity],
    ['a number', number(3), null],
  ])('bounds %s by its form', (_, rate, expected) => {
    if (expected === null) expect(boundedSpecies(prepareNetwork(law(rate)))).toEqual([]);
    else expect(g(law(rate), 0, 50)).toBe(expected);
  });

  it('looks through assignment rules', () => {
    const rule = { parameter: 1, expression: binary('multiply', species(1), species(1)) };
    const model = law(binary('multiply', species(0), parameter(1)), [rule]);
    expect(g(model, 0, 50)).toBe(3);
    expect(g(model, 1, 50)).toBe(3);
  });
});
