import { describe, expect, it } from 'vitest';
import { differenceOfNetworks } from './difference-of-networks.ts';
import type { NetworkDocument } from './document.ts';
import { summariseNetwork } from './summarise-network.ts';

const network: NetworkDocument = {
  timeUnit: 's',
  compartments: [{ id: 'cell', size: null }],
  species: [
    { id: 'A', initialCount: 10 },
    { id: 'B', initialCount: 2, boundary: true },
  ],
  parameters: [{ id: 'k', value: 0.5 }],
  reactions: [
    {
      id: 'r1',
      equation: 'A -> B',
      rateLaw: { kind: 'massAction', constant: 'k' },
      localParameters: [{ id: 'q', value: 1 }],
    },
    { id: 'r2', equation: 'B -> A', rateLaw: { kind: 'expression', expression: 'k * B' } },
  ],
};

describe('summariseNetwork', () => {
  it('counts rows, local parameters included', () => {
    expect(summariseNetwork(network)).toEqual({
      species: 2,
      boundarySpecies: 1,
      reactions: 2,
      expressionLaws: 1,
      parameters: 2,
      compartments: 1,
      assignmentRules: 0,
      observables: 0,
      changes: 0,
      initialMolecules: 12,
      text: '2 species · 2 reactions · 2 parameters',
    });
  });

  it('says one reaction, not one reactions', () => {
    expect(summariseNetwork({ species: [], reactions: [network.reactions[0]!] }).text).toBe(
      '0 species · 1 reaction · 1 parameter',
    );
  });
});

describe('differenceOfNetworks', () => {
  it('finds nothing between spellings of one network, in any order of rows', () => {
    const other: NetworkDocument = {
      ...network,
      species: [...network.species].reverse(),
      reactions: [{ ...network.reactions[1]! }, { ...network.reactions[0]!, equation: ' A → B', name: '' }],
    };
    expect(differenceOfNetworks(network, other)).toEqual([]);
  });

  it('names rows that came, went and changed, with each field before and after', () => {
    const other: NetworkDocument = {
      species: [
        { id: 'A', name: 'Free', initialCount: 11 },
        { id: 'C', initialCount: 0 },
      ],
      compartments: [{ id: 'cell', size: 2 }],
      parameters: [{ id: 'k', value: 0.5, unit: '1/s' }],
      reactions: [
        {
          ...network.reactions[0]!,
          rateLaw: { kind: 'expression', expression: 'k * A' },
          localParameters: [{ id: 'q', value: 3 }],
        },
      ],
    };
    expect(differenceOfNetworks(network, other)).toEqual([
      { kind: 'network', id: '', change: 'changed', fields: [{ field: 'time unit', from: 's', to: null }] },
      { kind: 'compartment', id: 'cell', change: 'changed', fields: [{ field: 'size', from: null, to: '2' }] },
      {
        kind: 'species',
        id: 'B',
        change: 'removed',
        fields: [
          { field: 'initial count', from: '2', to: null },
          { field: 'boundary', from: 'yes', to: null },
        ],
      },
      {
        kind: 'species',
        id: 'A',
        change: 'changed',
        fields: [
          { field: 'name', from: null, to: 'Free' },
          { field: 'initial count', from: '10', to: '11' },
        ],
      },
      { kind: 'species', id: 'C', change: 'added', fields: [{ field: 'initial count', from: null, to: '0' }] },
      { kind: 'parameter', id: 'k', change: 'changed', fields: [{ field: 'unit', from: null, to: '1/s' }] },
      {
        kind: 'reaction',
        id: 'r2',
        change: 'removed',
        fields: [
          { field: 'equation', from: 'B → A', to: null },
          { field: 'rate law', from: 'k * B', to: null },
        ],
      },
      {
        kind: 'reaction',
        id: 'r1',
        change: 'changed',
        fields: [{ field: 'rate law', from: 'mass action, constant k', to: 'k * A' }],
      },
      { kind: 'local parameter', id: 'r1.q', change: 'changed', fields: [{ field: 'value', from: '1', to: '3' }] },
    ]);
  });
});
