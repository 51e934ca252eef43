import { describe, expect, it } from 'vitest';
import type { NetworkDocument } from './document.ts';
import { parameterValuesAt } from './parameter-values.ts';
import { lawValue } from './propensity.ts';
import { resolveNetwork } from './resolve-network.ts';
import type { Overrides } from './document.ts';

const resolved = (document: NetworkDocument, overrides?: Overrides) => {
  const outcome = resolveNetwork(document, overrides);
  if (!outcome.ok) throw new Error(JSON.stringify(outcome.problems));
  return outcome.network;
};
const problemsOf = (document: NetworkDocument, overrides?: Overrides) => {
  const outcome = resolveNetwork(document, overrides);
  return outcome.ok ? [] : outcome.problems.map(({ path, code }) => ({ path, code }));
};
/** The propensities in the initial state. */
const propensities = (document: NetworkDocument, overrides?: Overrides): number[] => {
  const network = resolved(document, overrides);
  const counts = network.species.map(({ initialCount }) => initialCount);
  return network.reactions.map((reaction) => lawValue(reaction, counts, parameterValuesAt(network, counts)));
};

const dimer: NetworkDocument = {
  species: [
    { id: 'A', initialCount: 10 },
    { id: 'B', initialCount: 3, boundary: true },
    { id: 'C', initialCount: 0 },
  ],
  parameters: [{ id: 'k', value: 0.5 }],
  reactions: [
    { id: 'bind', equation: '2 A + B → C + B', rateLaw: { kind: 'massAction', constant: 'k' } },
    { id: 'feed', equation: '∅ → A', rateLaw: { kind: 'expression', expression: '2 * k' } },
  ],
};

describe('resolveNetwork', () => {
  it('indexes species, reactants and net changes, leaving boundary species unchanged', () => {
    const network = resolved(dimer);
    expect(network.species).toEqual([
      { id: 'A', initialCount: 10, boundary: false },
      { id: 'B', initialCount: 3, boundary: true },
      { id: 'C', initialCount: 0, boundary: false },
    ]);
    expect(network.reactions[0]).toEqual({
      id: 'bind',
      reactants: [
        { species: 0, count: 2 },
        { species: 1, count: 1 },
      ],
      changes: [
        { species: 0, count: -2 },
        { species: 2, count: 1 },
      ],
      law: { kind: 'massAction', constant: { kind: 'parameter', index: 0 } },
    });
    expect(network.observables.map(({ id }) => id)).toEqual(['A', 'B', 'C']);
  });

  it('counts the ways of choosing reactants: 2A + B at 10 and 3 gives k · 45 · 3', () => {
    // Combinatorial mass action: Gillespie 1977, J. Phys. Chem. 81:2340 (citation from memory).
    expect(propensities(dimer)).toEqual([0.5 * 45 * 3, 1]);
  });

  it('leaves a catalyst out of the changes but not out of the reactants', () => {
    const network = resolved({
      species: [
        { id: 'm', initialCount: 1 },
        { id: 'p', initialCount: 0 },
      ],
      reactions: [{ id: 'make', equation: 'm → m + p', rateLaw: { kind: 'massAction', constant: '1' } }],
    });
    expect(network.reactions[0]!.reactants).toEqual([{ species: 0, count: 1 }]);
    expect(network.reactions[0]!.changes).toEqual([{ species: 1, count: 1 }]);
  });

  it('turns a concentration into count / compartment size: V·k·[A]·[B] at V = 2, 10 and 6 molecules is k·30', () => {
    const document: NetworkDocument = {
      compartments: [{ id: 'V', size: 2 }],
      species: [
        { id: 'A', compartment: 'V', initialCount: 10, meaning: 'concentration' },
        { id: 'B', compartment: 'V', initialCount: 6, meaning: 'concentration' },
      ],
      parameters: [{ id: 'k', value: 0.1 }],
      reactions: [{ id: 'r', equation: 'A + B → ∅', rateLaw: { kind: 'expression', expression: 'V * k * A * B' } }],
    };
    expect(propensities(document)[0]).toBeCloseTo((0.1 * 60) / 2, 12);
    expect(propensities(document, { parameters: { V: 4 } })[0]).toBeCloseTo((0.1 * 60) / 4, 12);
  });

  it('lets local parameters shadow global names, only inside their reaction', () => {
    const document: NetworkDocument = {
      species: [{ id: 'A', initialCount: 1 }],
      parameters: [{ id: 'k', value: 1 }],
      reactions: [
        {
          id: 'r1',
          equation: 'A → ∅',
          rateLaw: { kind: 'massAction', constant: 'k' },
          localParameters: [{ id: 'k', value: 7 }],
        },
        { id: 'r2', equation: 'A → ∅', rateLaw: { kind: 'massAction', constant: 'k' } },
      ],
    };
    expect(propensities(document)).toEqual([7, 1]);
    expect(propensities(document, { parameters: { 'r1.k': 9, k: 2 } })).toEqual([9, 2]);
    expect(resolved(document).parameters.map(({ id }) => id)).toEqual(['k', 'r1.k']);
  });

  it('puts assignment rules into dependency order', () => {
    const document: NetworkDocument = {
      species: [{ id: 'A', initialCount: 4 }],
      parameters: [
        { id: 'twice', value: 0 },
        { id: 'once', value: 0 },
      ],
      assignmentRules: [
        { variable: 'twice', expression: '2 * once' },
        { variable: 'once', expression: 'A + 1' },
      ],
      reactions: [{ id: 'r', equation: 'A → ∅', rateLaw: { kind: 'expression', expression: 'twice' } }],
    };
    expect(resolved(document).assignments.map(({ parameter }) => parameter)).toEqual([1, 0]);
    expect(propensities(document)).toEqual([10]);
  });

  it('treats a species set by a rule as a parameter and still reports its count', () => {
    const network = resolved({
      compartments: [{ id: 'V', size: 4 }],
      species: [
        { id: 'A', initialCount: 6 },
        { id: 'half', initialCount: 0, compartment: 'V', meaning: 'concentration' },
      ],
      assignmentRules: [{ variable: 'half', expression: 'A / 2' }],
      reactions: [{ id: 'r', equation: 'A → ∅', rateLaw: { kind: 'expression', expression: 'half' } }],
    });
    expect(network.species.map(({ id }) => id)).toEqual(['A']);
    expect(network.parameters.map(({ id }) => id)).toEqual(['V', 'half']);
    expect(network.observables[1]).toEqual({
      id: 'half',
      expression: {
        kind: 'binary',
        operator: 'multiply',
        left: { kind: 'parameter', index: 1 },
        right: { kind: 'parameter', index: 0 },
      },
    });
  });

  it('reports all species, then the named observables', () => {
    const network = resolved({ ...dimer, observables: [{ id: 'total', expression: 'A + 2 * C' }] });
    expect(network.observables.map(({ id }) => id)).toEqual(['A', 'B', 'C', 'total']);
  });

  it('puts overrides in place of values, without changing anything else', () => {
    const plain = resolved(dimer);
    const other = resolved(dimer, { parameters: { k: 2 }, initialCounts: { A: 5 } });
    expect(other).toEqual({
      ...plain,
      species: [{ ...plain.species[0], initialCount: 5 }, plain.species[1], plain.species[2]],
      parameters: [{ id: 'k', value: 2 }],
    });
  });

  it.each([
    [{ parameters: { kk: 1 } }, 'overrides.parameters.kk', 'unknown_parameter'],
    [{ parameters: { A: 1 } }, 'overrides.parameters.A', 'unknown_parameter'],
    [{ parameters: { k: NaN } }, 'overrides.parameters.k', 'invalid_value'],
    [{ parameters: { k: -1 } }, 'reactions[0].rateLaw.constant', 'negative_constant'],
    [{ initialCounts: { X: 1 } }, 'overrides.initialCounts.X', 'unknown_species'],
    [{ initialCounts: { A: 1.5 } }, 'overrides.initialCounts.A', 'non_integer_count'],
    [{ initialCounts: { A: -1 } }, 'overrides.initialCounts.A', 'negative_count'],
    [{ initialCounts: { A: 2 ** 31 } }, 'overrides.initialCounts.A', 'count_too_large'],
  ])('refuses the override %j at %s as %s', (overrides, path, code) => {
    expect(problemsOf(dimer, overrides)).toEqual([{ path, code }]);
  });

  it('refuses to override what a rule works out', () => {
    const document: NetworkDocument = {
      ...dimer,
      parameters: [...dimer.parameters!, { id: 'q', value: 0 }],
      assignmentRules: [{ variable: 'q', expression: 'A' }],
    };
    expect(problemsOf(document, { parameters: { q: 1 } })).toEqual([
      { path: 'overrides.parameters.q', code: 'assigned_by_rule' },
    ]);
  });
});
