import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { arbitraryNetwork } from '@tests/factories/arbitrary-network.ts';
import { checkNetwork } from '@/domain/network/check-network.ts';
import type { NetworkDocument } from '@/domain/network/document.ts';
import { evaluateExpression } from '@/domain/network/evaluate-expression.ts';
import { parameterValuesAt } from '@/domain/network/parameter-values.ts';
import { hasReactants, lawValue } from '@/domain/network/propensity.ts';
import { resolveNetwork } from '@/domain/network/resolve-network.ts';
import { readSbml } from './read-sbml.ts';
import { writeSbml } from './write-sbml.ts';

const reread = (document: NetworkDocument): NetworkDocument => {
  const outcome = readSbml(writeSbml(document, { modelId: 'm', name: 'A model' }));
  if (!outcome.ok) throw new Error(JSON.stringify(outcome.problems));
  return outcome.document;
};

/** Initial counts, changes, and propensities and observables in a few states: what a network means. */
function meaningOf(document: NetworkDocument) {
  const outcome = resolveNetwork(document);
  if (!outcome.ok) throw new Error(JSON.stringify(outcome.problems));
  const { network } = outcome;
  const initial = network.species.map(({ initialCount }) => initialCount);
  const states = [
    initial,
    initial.map(() => 0),
    initial.map(() => 1),
    initial.map((_, index) => index + 2),
    initial.map((count) => count * 7 + 3),
  ];
  return {
    species: network.species,
    changes: network.reactions.map(({ id, changes, reactants }) => ({ id, changes, reactants })),
    values: states.map((counts) => {
      const parameters = parameterValuesAt(network, counts);
      return {
        propensities: network.reactions.map((reaction) =>
          hasReactants(reaction, counts) ? lawValue(reaction, counts, parameters) : 0,
        ),
        observables: network.observables.map(({ expression }) =>
          evaluateExpression(expression, { species: counts, parameters }),
        ),
      };
    }),
  };
}

/** Equal, or nearer than rounding in another order of multiplication allows. */
function expectSameMeaning(actual: ReturnType<typeof meaningOf>, expected: ReturnType<typeof meaningOf>) {
  expect(actual.species).toEqual(expected.species);
  expect(actual.changes).toEqual(expected.changes);
  const flat = (meaning: ReturnType<typeof meaningOf>) =>
    meaning.values.flatMap(({ propensities, observables }) => [...propensities, ...observables]);
  const [left, right] = [flat(actual), flat(expected)];
  expect(left).toHaveLength(right.length);
  left.forEach((value, index) => {
    const other = right[index]!;
    const close = Object.is(value + 0, other + 0) || Math.abs(value - other) <= 1e-12 * Math.abs(other);
    expect(close, `${value} against ${other} at ${index}`).toBe(true);
  });
}

describe('document → SBML → document', () => {
  it('keeps the meaning of any network (300 random networks, fixed seed)', () => {
    fc.assert(
      fc.property(arbitraryNetwork, (document) => {
        // A finite, non-negative start is what runs; the rest of the states may be undefined, and then is in both.
        expectSameMeaning(meaningOf(reread(document)), meaningOf(document));
      }),
      { seed: 20261203, numRuns: 300 },
    );
  });

  it('keeps the text of an ordinary network as it is', () => {
    const document: NetworkDocument = {
      timeUnit: 'h',
      compartments: [{ id: 'cell', name: 'One cell', size: 1e-15, unit: 'L' }],
      species: [
        {
          id: 'A',
          name: 'Free & “active” <A>',
          compartment: 'cell',
          initialCount: 100,
          boundary: false,
          meaning: 'count',
        },
        { id: 'A2', compartment: 'cell', initialCount: 0, boundary: true, meaning: 'concentration' },
        { id: 'loose', initialCount: 3, boundary: false, meaning: 'count' },
      ],
      parameters: [
        { id: 'k', name: 'Rate', value: 0.25, unit: '1/h' },
        { id: 'half', value: 50 },
        { id: 'level', value: 1 },
      ],
      assignmentRules: [{ variable: 'level', expression: 'A / (A + half)' }],
      reactions: [
        {
          id: 'bind',
          name: 'Dimerisation',
          equation: '2 A → A2',
          rateLaw: { kind: 'massAction', constant: 'k / cell' },
        },
        {
          id: 'part',
          equation: 'A2 → 2 A',
          rateLaw: { kind: 'massAction', constant: 'own' },
          localParameters: [{ id: 'own', value: 3, unit: '1/h' }],
        },
        {
          id: 'feed',
          equation: '∅ → A',
          rateLaw: { kind: 'expression', expression: 'k * piecewise(2, level > 0.5 and not A == 3, 1)' },
        },
        { id: 'lose', equation: 'loose + A → A', rateLaw: { kind: 'massAction', constant: 'k' } },
      ],
      observables: [{ id: 'total', name: 'All A', expression: 'A + 2 * A2 * cell' }],
    };
    expect(checkNetwork(document).filter(({ severity }) => severity === 'error')).toEqual([]);
    expect(reread(document)).toEqual(document);
  });

  it('keeps an expression law an expression, even one that is mass action in disguise, and takes its own guard off again', () => {
    const document: NetworkDocument = {
      species: [{ id: 'A', initialCount: 4 }],
      parameters: [{ id: 'k', value: 2 }],
      reactions: [
        { id: 'r1', equation: 'A → ∅', rateLaw: { kind: 'expression', expression: 'k * A' } },
        { id: 'r2', equation: '2 A → A', rateLaw: { kind: 'expression', expression: 'A' } },
      ],
    };
    expect(writeSbml(document, { modelId: 'm', name: 'm' })).toContain('<piecewise>');
    expect(reread(document).reactions.map(({ rateLaw }) => rateLaw)).toEqual(
      document.reactions.map(({ rateLaw }) => rateLaw),
    );
  });

  it('keeps the guard of a law when the file has lost our mark', () => {
    const document: NetworkDocument = {
      species: [{ id: 'A', initialCount: 4 }],
      reactions: [{ id: 'r', equation: '2 A → A', rateLaw: { kind: 'expression', expression: 'A' } }],
    };
    const unmarked = writeSbml(document, { modelId: 'm', name: 'm' }).replaceAll(
      '<burette:expression',
      '<burette:other',
    );
    const outcome = readSbml(unmarked);
    expect(outcome.ok && outcome.document.reactions[0]!.rateLaw).toEqual({
      kind: 'expression',
      expression: 'piecewise(A, A >= 2, 0)',
    });
  });
});
