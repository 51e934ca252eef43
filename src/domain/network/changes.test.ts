import { describe, expect, it } from 'vitest';
import { limits } from '../limits.ts';
import { checkNetwork } from './check-network.ts';
import { differenceOfNetworks } from './difference-of-networks.ts';
import type { ChangeDocument, NetworkDocument } from './document.ts';
import { normaliseDocument } from './normalise-document.ts';
import { resolveNetwork } from './resolve-network.ts';

const withChanges = (...changes: Partial<ChangeDocument>[]): NetworkDocument => ({
  compartments: [
    { id: 'blood', size: 5 },
    { id: 'unset', size: null },
  ],
  species: [
    { id: 'D', initialCount: 0 },
    { id: 'C', initialCount: 10, compartment: 'blood', meaning: 'concentration' },
    { id: 'U', initialCount: 0, compartment: 'unset', meaning: 'concentration' },
    { id: 'E', initialCount: 5 },
  ],
  parameters: [
    { id: 'dose', value: 100 },
    { id: 'interval', value: 12 },
    { id: 'k', value: 0.1 },
    { id: 'ruled', value: 0 },
  ],
  assignmentRules: [{ variable: 'ruled', expression: 'D + 1' }],
  reactions: [
    { id: 'lose', equation: 'D → ∅', rateLaw: { kind: 'massAction', constant: 'k' } },
    { id: 'swap', equation: 'E → C', rateLaw: { kind: 'massAction', constant: 'k' } },
  ],
  changes: changes.map((change, index) => ({
    id: `change${index}`,
    when: { kind: 'time', time: '0' },
    assignments: [{ variable: 'D', expression: 'D + dose' }],
    ...change,
  })),
});
const resolved = (document: NetworkDocument, overrides = {}) => {
  const outcome = resolveNetwork(document, overrides);
  if (!outcome.ok) throw new Error(JSON.stringify(outcome.problems));
  return outcome.network;
};
const errors = (document: NetworkDocument) =>
  checkNetwork(document)
    .filter(({ severity }) => severity === 'error')
    .map(({ path, code }) => `${path} ${code}`);

describe('timed and triggered changes', () => {
  it('work out the times of repeated doses, which overrides can move', () => {
    const document = withChanges({ when: { kind: 'time', time: 'interval / 2', every: 'interval', times: 3 } });
    expect(resolved(document).changes![0]).toMatchObject({
      id: 'change0',
      when: { kind: 'times', times: [6, 18, 30] },
    });
    expect(resolved(document, { parameters: { interval: 4 } }).changes![0]!.when).toEqual({
      kind: 'times',
      times: [2, 6, 10],
    });
  });

  it('set counts as counts, concentrations as concentration · size, and parameters', () => {
    const assignments = [
      { variable: 'D', expression: 'D + dose' },
      { variable: 'C', expression: '2' },
      { variable: 'k', expression: 'k / 2' },
    ];
    const { sets } = resolved(withChanges({ assignments })).changes![0]!;
    const parameter = (index: number) => ({ kind: 'parameter', index });
    expect(sets).toEqual([
      {
        target: { kind: 'species', index: 0 },
        expression: { kind: 'binary', operator: 'add', left: { kind: 'species', index: 0 }, right: parameter(0) },
      },
      {
        target: { kind: 'species', index: 1 },
        expression: { kind: 'binary', operator: 'multiply', left: { kind: 'number', value: 2 }, right: parameter(4) },
      },
      {
        target: parameter(2),
        expression: { kind: 'binary', operator: 'divide', left: parameter(2), right: { kind: 'number', value: 2 } },
      },
    ]);
  });

  it('count a condition as true before the start unless it is to happen at the start', () => {
    const when = { kind: 'condition' as const, condition: 'D < 10' };
    expect(resolved(withChanges({ when })).changes![0]!.when).toMatchObject({ kind: 'condition', before: true });
    expect(resolved(withChanges({ when: { ...when, happensAtStart: true } })).changes![0]!.when).toMatchObject({
      before: false,
    });
  });

  it('leave a network without changes as it was', () => {
    expect(resolved(withChanges())).not.toHaveProperty('changes');
    expect(normaliseDocument(withChanges())).not.toHaveProperty('changes');
  });

  const set = (variable: string, expression = '1') => ({ assignments: [{ variable, expression }] });
  const cases: [string, Partial<ChangeDocument>, string][] = [
    ['a negative time', { when: { kind: 'time', time: '-1' } }, 'changes[0].when.time invalid_time'],
    ['an undefined time', { when: { kind: 'time', time: '0 / 0' } }, 'changes[0].when.time invalid_time'],
    [
      'a time that depends on a count',
      { when: { kind: 'time', time: 'ruled' } },
      'changes[0].when.time time_not_constant',
    ],
    [
      'an interval of 0',
      { when: { kind: 'time', time: '0', every: '0', times: 2 } },
      'changes[0].when.every invalid_time',
    ],
    [
      'an interval without a number of times',
      { when: { kind: 'time', time: '0', every: '1' } },
      'changes[0].when.times invalid_repetition',
    ],
    [
      'a number of times without an interval',
      { when: { kind: 'time', time: '0', times: 2 } },
      'changes[0].when.every invalid_repetition',
    ],
    [
      'half a repetition',
      { when: { kind: 'time', time: '0', every: '1', times: 1.5 } },
      'changes[0].when.times invalid_repetition',
    ],
    [
      'too many repetitions',
      { when: { kind: 'time', time: '0', every: '1', times: limits.changeTimes + 1 } },
      'changes[0].when.times too_many',
    ],
    [
      'a broken condition',
      { when: { kind: 'condition', condition: 'D <' } },
      'changes[0].when.condition unfinished_expression',
    ],
    [
      'time in a condition',
      { when: { kind: 'condition', condition: 'time > 3' } },
      'changes[0].when.condition time_in_expression',
    ],
    [
      'an unknown name in a condition',
      { when: { kind: 'condition', condition: 'Q > 3' } },
      'changes[0].when.condition unknown_name',
    ],
    ['nothing set', { assignments: [] }, 'changes[0].assignments empty_change'],
    ['something unknown set', set('Q'), 'changes[0].assignments[0].variable unknown_name'],
    ['a ruled parameter set', set('ruled'), 'changes[0].assignments[0].variable assigned_by_rule'],
    ['a compartment set', set('blood'), 'changes[0].assignments[0].variable variable_compartment'],
    ['a concentration without a size set', set('U'), 'changes[0].assignments[0].variable unset_compartment'],
    [
      'one variable set twice',
      {
        assignments: [
          { variable: 'D', expression: '1' },
          { variable: 'D', expression: '2' },
        ],
      },
      'changes[0].assignments[1].variable set_twice',
    ],
    ['an unknown name in a value', set('D', 'Q'), 'changes[0].assignments[0].expression unknown_name'],
    ['an id taken twice', { id: 'D' }, 'changes[0].id duplicate_id'],
  ];
  it.each(cases)('name %s and its cell', (_, change, expected) => {
    expect(errors(withChanges(change))).toEqual([expected]);
  });

  it('cannot be timed by a parameter that another change sets', () => {
    const document = withChanges({ when: { kind: 'time', time: 'interval' } }, set('interval', '3'));
    expect(errors(document)).toEqual(['changes[0].when.time time_not_constant']);
    const ruled = { ...document, assignmentRules: [{ variable: 'ruled', expression: '2 * interval' }] };
    ruled.changes![0]!.when = { kind: 'time', time: 'ruled' };
    expect(errors(ruled)).toEqual(['changes[0].when.time time_not_constant']);
  });

  it('make a species reachable, and end the conservation of what they set', () => {
    const advice = (document: NetworkDocument) => checkNetwork(document).map(({ path, code }) => `${path} ${code}`);
    expect(advice(withChanges())).toContain('reactions[0].equation never_fires');
    expect(advice(withChanges())).toContain('species[1].id conserved_total');
    expect(advice(withChanges({}))).not.toContain('reactions[0].equation never_fires');
    expect(advice(withChanges(set('C')))).not.toContain('species[1].id conserved_total');
  });

  it('leave the totals of the others: of A + B → C → D those without what is dosed', () => {
    const species = ['A', 'B', 'C', 'D'].map((id) => ({ id, initialCount: 2 }));
    const swap = (id: string, equation: string) => ({
      id,
      equation,
      rateLaw: { kind: 'massAction' as const, constant: '1' },
    });
    // Weights with a + b = c = d, by hand: (1, 0, 1, 1) and (0, 1, 1, 1); with d = 0 too, (1, −1, 0, 0).
    const document = { species, reactions: [swap('r', 'A + B → C'), swap('s', 'C → D')] };
    const totals = (dosed: string) => {
      const when = { kind: 'time' as const, time: '1' };
      const changes = [{ id: 'dose', when, assignments: [{ variable: dosed, expression: '9' }] }];
      return checkNetwork({ ...document, changes }).flatMap(({ code, message }) =>
        code === 'conserved_total' ? [message] : [],
      );
    };
    expect(totals('B')).toEqual(['Conserved: A + C + D = 6.']);
    expect(totals('D')).toEqual(['Conserved: A − B = 0.']);
  });

  it('are part of the canonical form and of the difference', () => {
    const before = withChanges({ when: { kind: 'time', time: ' interval ' } });
    const after = withChanges({ when: { kind: 'condition', condition: 'D < 3', happensAtStart: true } });
    expect(normaliseDocument(before).changes).toEqual([
      {
        id: 'change0',
        when: { kind: 'time', time: 'interval' },
        assignments: [{ variable: 'D', expression: 'D + dose' }],
      },
    ]);
    expect(differenceOfNetworks(before, after)).toEqual([
      {
        kind: 'change',
        id: 'change0',
        change: 'changed',
        fields: [{ field: 'when', from: 'at interval', to: 'when D < 3, at the start too' }],
      },
    ]);
  });
});
