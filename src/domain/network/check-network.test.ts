import { describe, expect, it } from 'vitest';
import { limits } from '../limits.ts';
import { checkNetwork } from './check-network.ts';
import type { NetworkDocument, Problem, ReactionDocument } from './document.ts';

const massAction = (id: string, equation: string, constant = '1'): ReactionDocument => ({
  id,
  equation,
  rateLaw: { kind: 'massAction', constant },
});
const byExpression = (id: string, equation: string, expression: string): ReactionDocument => ({
  id,
  equation,
  rateLaw: { kind: 'expression', expression },
});
const birthDeath: NetworkDocument = {
  species: [{ id: 'X', initialCount: 5 }],
  parameters: [
    { id: 'birth', value: 10 },
    { id: 'death', value: 0.1 },
  ],
  reactions: [massAction('make', '∅ → X', 'birth'), massAction('lose', 'X → ∅', 'death')],
};
const found = (document: NetworkDocument, severity?: Problem['severity']) =>
  checkNetwork(document)
    .filter((problem) => severity === undefined || problem.severity === severity)
    .map(({ path, code }) => `${path} ${code}`);
const messages = (document: NetworkDocument) => checkNetwork(document).map(({ message }) => message);

describe('checkNetwork: errors', () => {
  it('finds nothing in a sound network', () => {
    expect(checkNetwork(birthDeath)).toEqual([]);
  });

  const cases: [string, NetworkDocument, string[]][] = [
    ['an empty network', { species: [], reactions: [] }, ['species empty_network']],
    [
      'no species',
      { species: [], reactions: [massAction('r', 'A → ∅')] },
      ['species no_species', 'reactions[0].equation unknown_species'],
    ],
    ['no reactions', { species: birthDeath.species, reactions: [] }, ['reactions no_reactions']],
    [
      'an id with a space',
      { ...birthDeath, species: [{ id: 'my X', initialCount: 1 }, ...birthDeath.species] },
      ['species[0].id invalid_id'],
    ],
    [
      'a reserved word',
      { ...birthDeath, parameters: [...birthDeath.parameters!, { id: 'exp', value: 1 }] },
      ['parameters[2].id reserved_word'],
    ],
    [
      'an id taken twice',
      { ...birthDeath, parameters: [...birthDeath.parameters!, { id: 'X', value: 1 }] },
      ['parameters[2].id duplicate_id'],
    ],
    [
      'a missing id',
      { ...birthDeath, species: [...birthDeath.species, { id: '', initialCount: 1 }] },
      ['species[1].id missing_id'],
    ],
    [
      'a negative count',
      { ...birthDeath, species: [{ id: 'X', initialCount: -1 }] },
      ['species[0].initialCount negative_count'],
    ],
    [
      'a count that is not whole',
      { ...birthDeath, species: [{ id: 'X', initialCount: 2.5 }] },
      ['species[0].initialCount non_integer_count'],
    ],
    [
      'an oversize count',
      { ...birthDeath, species: [{ id: 'X', initialCount: 2 ** 31 }] },
      ['species[0].initialCount count_too_large'],
    ],
    [
      'a count that is no number',
      { ...birthDeath, species: [{ id: 'X', initialCount: NaN }] },
      ['species[0].initialCount invalid_count'],
    ],
    [
      'a value that is no number',
      {
        ...birthDeath,
        parameters: [
          { id: 'birth', value: Infinity },
          { id: 'death', value: 1 },
        ],
      },
      ['parameters[0].value invalid_value'],
    ],
    [
      'an unknown name in a law',
      { ...birthDeath, reactions: [massAction('r', 'X → ∅', 'deaht')] },
      ['reactions[0].rateLaw.constant unknown_name'],
    ],
    [
      'an unknown species',
      { ...birthDeath, reactions: [massAction('r', 'Y → ∅')] },
      ['reactions[0].equation unknown_species'],
    ],
    [
      'a parameter in an equation',
      { ...birthDeath, reactions: [massAction('r', 'birth → ∅')] },
      ['reactions[0].equation unknown_species'],
    ],
    [
      'stoichiometry that is not whole',
      { ...birthDeath, reactions: [massAction('r', '1.5 X → ∅')] },
      ['reactions[0].equation non_integer_stoichiometry'],
    ],
    [
      'a reversible arrow',
      { ...birthDeath, reactions: [massAction('r', 'X ⇌ 2 X')] },
      ['reactions[0].equation reversible_equation'],
    ],
    [
      'a species in the constant',
      { ...birthDeath, reactions: [massAction('r', 'X → ∅', 'death * X')] },
      ['reactions[0].rateLaw.constant species_in_constant'],
    ],
    [
      'time in a law',
      { ...birthDeath, reactions: [byExpression('r', 'X → ∅', 'X * time')] },
      ['reactions[0].rateLaw.expression time_in_expression'],
    ],
    [
      'a reaction in a law',
      { ...birthDeath, reactions: [byExpression('r', 'X → ∅', 'X * r')] },
      ['reactions[0].rateLaw.expression reaction_in_expression'],
    ],
    [
      'a negative constant',
      { ...birthDeath, reactions: [massAction('r', 'X → ∅', '-death')] },
      ['reactions[0].rateLaw.constant negative_constant'],
    ],
    [
      'an undefined constant',
      { ...birthDeath, reactions: [massAction('r', 'X → ∅', 'ln(-death)')] },
      ['reactions[0].rateLaw.constant constant_not_a_number'],
    ],
    [
      'a broken law',
      { ...birthDeath, reactions: [byExpression('r', 'X → ∅', '2 * (X')] },
      ['reactions[0].rateLaw.expression unbalanced_parenthesis'],
    ],
    [
      'an observable of an observable',
      {
        ...birthDeath,
        observables: [
          { id: 'a', expression: 'X' },
          { id: 'b', expression: 'a' },
        ],
      },
      ['observables[1].expression observable_in_expression'],
    ],
  ];
  it.each(cases)('names %s and its cell', (_, document, expected) => {
    expect(found(document)).toEqual(expected);
  });

  it('suggests the nearest name and the rounded count', () => {
    expect(messages({ ...birthDeath, reactions: [massAction('r', 'X → ∅', 'deaht')] })[0]).toContain(
      'Did you mean death?',
    );
    expect(messages({ ...birthDeath, species: [{ id: 'X', initialCount: 2.6 }] })[0]).toContain('Round it to 3?');
  });

  it('needs a compartment size only where something divides by it', () => {
    const inCell = (meaning: 'count' | 'concentration'): NetworkDocument => ({
      compartments: [{ id: 'cell', size: null }],
      species: [{ id: 'X', initialCount: 5, compartment: 'cell', meaning }],
      reactions: [byExpression('lose', 'X → ∅', 'X')],
    });
    expect(found(inCell('count'))).toEqual([]);
    expect(found(inCell('concentration'))).toEqual(['reactions[0].rateLaw.expression unset_compartment']);
    expect(found({ ...inCell('count'), reactions: [byExpression('lose', 'X → ∅', 'X * cell')] })).toEqual([
      'reactions[0].rateLaw.expression unset_compartment',
    ]);
    expect(found({ ...inCell('count'), compartments: [{ id: 'cell', size: 0 }] })).toEqual([
      'compartments[0].size invalid_size',
    ]);
    expect(found({ ...inCell('count'), compartments: [] })).toEqual(['species[0].compartment unknown_compartment']);
    expect(found({ ...birthDeath, species: [{ id: 'X', initialCount: 1, meaning: 'concentration' }] })).toContain(
      'species[0].compartment missing_compartment',
    );
  });

  it('follows rules: cycles, doubled rules, assigned species in equations, species behind a constant', () => {
    const withRules = (rules: [string, string][], reactions = birthDeath.reactions): NetworkDocument => ({
      ...birthDeath,
      species: [...birthDeath.species, { id: 'Y', initialCount: 0 }],
      parameters: [...birthDeath.parameters!, { id: 'p', value: 0 }, { id: 'q', value: 0 }],
      assignmentRules: rules.map(([variable, expression]) => ({ variable, expression })),
      reactions,
    });
    expect(
      found(
        withRules([
          ['p', 'q'],
          ['q', '2 * p'],
        ]),
      ),
    ).toEqual(['assignmentRules[0].expression cyclic_rules']);
    expect(found(withRules([['p', 'p + 1']]))).toEqual(['assignmentRules[0].expression cyclic_rules']);
    expect(
      found(
        withRules([
          ['p', '1'],
          ['p', '2'],
        ]),
      ),
    ).toEqual(['assignmentRules[1].variable duplicate_rule']);
    expect(found(withRules([['Z', '1']]))).toEqual(['assignmentRules[0].variable unknown_name']);
    expect(found(withRules([['Y', 'X / 2']], [massAction('r', 'Y → ∅')]))).toEqual([
      'reactions[0].equation assigned_species_in_equation',
    ]);
    expect(
      found(
        withRules(
          [
            ['p', 'q'],
            ['q', 'X'],
          ],
          [massAction('r', 'X → ∅', 'p')],
        ),
      ),
    ).toEqual(['reactions[0].rateLaw.constant species_in_constant']);
    expect(found(withRules([['p', 'q']], [massAction('r', 'X → ∅', '1 + p')]), 'error')).toEqual([]);
  });

  it('answers 100,000 reactions with one clear error, at once', () => {
    const reactions = Array.from({ length: 100_000 }, (_, index) => massAction(`r${index}`, 'X → ∅'));
    expect(checkNetwork({ ...birthDeath, reactions })).toEqual([
      {
        severity: 'error',
        path: 'reactions',
        code: 'too_many',
        message: '100,000 reactions: a network holds at most 20,000.',
      },
    ]);
  });

  it('cuts a long list of errors and says how many are left out', () => {
    const reactions = Array.from({ length: 500 }, (_, index) => massAction(`r${index}`, 'Q → ∅'));
    const problems = checkNetwork({ ...birthDeath, reactions });
    expect(problems).toHaveLength(201);
    expect(problems.at(-1)).toMatchObject({ code: 'more_problems', message: expect.stringContaining('300 more') });
  });

  it('checks a chain of the largest size', () => {
    const species = Array.from({ length: limits.speciesPerNetwork }, (_, index) => ({
      id: `S${index}`,
      initialCount: 1,
    }));
    const reactions = species.slice(1).map(({ id }, index) => massAction(`r${index}`, `S${index} → ${id}`));
    expect(found({ species, reactions }, 'error')).toEqual([]);
  });
});

describe('checkNetwork: advice', () => {
  it('warns of a reaction that can never fire', () => {
    const document: NetworkDocument = {
      species: [
        { id: 'A', initialCount: 1 },
        { id: 'B', initialCount: 0 },
        { id: 'C', initialCount: 0 },
      ],
      reactions: [massAction('two', '2 A → B'), massAction('next', 'B → C'), massAction('back', 'C → A')],
    };
    expect(found(document, 'warning')).toEqual([
      'reactions[0].equation never_fires',
      'reactions[1].equation never_fires',
      'reactions[2].equation never_fires',
    ]);
    expect(
      found({ ...document, species: [{ id: 'A', initialCount: 2 }, ...document.species.slice(1)] }, 'warning'),
    ).toEqual([]);
  });

  it('warns of a zero constant and of a rate that is negative at the start', () => {
    expect(found({ ...birthDeath, reactions: [massAction('r', 'X → ∅', '0')] }, 'warning')).toEqual([
      'reactions[0].rateLaw.constant zero_constant',
    ]);
    expect(found({ ...birthDeath, reactions: [byExpression('r', 'X → ∅', 'X * (4 - X)')] }, 'warning')).toContain(
      'reactions[0].rateLaw.expression bad_rate_at_start',
    );
  });

  it('reports the guard of a law that stays positive without its reactants', () => {
    expect(found({ ...birthDeath, reactions: [byExpression('r', 'X → ∅', '3')] }, 'warning')).toEqual([
      'reactions[0].rateLaw.expression guarded_law',
    ]);
    expect(found({ ...birthDeath, reactions: [byExpression('r', '2 X → X', 'X * X')] }, 'warning')).toEqual([
      'reactions[0].rateLaw.expression guarded_law',
    ]);
    expect(found({ ...birthDeath, reactions: [byExpression('r', '2 X → X', 'X * (X - 1) / 2')] }, 'warning')).toEqual(
      [],
    );
  });

  it('states the conserved totals of an enzyme with four steps', () => {
    // E + S ⇌ ES → E + P: total enzyme and total substrate (standard mass balance, common practice).
    const enzyme: NetworkDocument = {
      species: [
        { id: 'E', initialCount: 10 },
        { id: 'S', initialCount: 100 },
        { id: 'ES', initialCount: 0 },
        { id: 'P', initialCount: 3 },
      ],
      reactions: [
        massAction('on', 'E + S → ES'),
        massAction('off', 'ES → E + S'),
        massAction('turn', 'ES → E + P'),
        massAction('back', 'E + P → ES'),
      ],
    };
    expect(messages(enzyme)).toEqual(['Conserved: E + ES = 10.', 'Conserved: S + ES + P = 103.']);
  });

  it('weights conserved totals by the stoichiometry and finds species that never change', () => {
    const dimer: NetworkDocument = {
      species: [
        { id: 'A', initialCount: 7 },
        { id: 'A2', initialCount: 1 },
        { id: 'cat', initialCount: 2 },
      ],
      reactions: [massAction('on', '2 A + cat → A2 + cat'), massAction('off', 'A2 → 2 A')],
    };
    expect(messages(dimer).sort()).toEqual(['Conserved: A + 2 A2 = 9.', 'cat never changes: it stays 2.']);
  });

  it('suspects growth where births outrun deaths, and not where they do not', () => {
    const linear = (birth: number, death: number): NetworkDocument => ({
      species: [{ id: 'X', initialCount: 5 }],
      reactions: [massAction('birth', 'X → 2 X', String(birth)), massAction('death', 'X → ∅', String(death))],
    });
    expect(found(linear(1, 0.5), 'warning')).toEqual(['species[0].id growth_suspected']);
    expect(found(linear(0.5, 1), 'warning')).toEqual([]);
    expect(found(birthDeath, 'warning')).toEqual([]);
    const logistic: NetworkDocument = {
      species: [{ id: 'X', initialCount: 5 }],
      reactions: [massAction('birth', 'X → 2 X'), massAction('crowd', '2 X → X', '0.001')],
    };
    expect(found(logistic, 'warning')).toEqual([]);
    const twoStage: NetworkDocument = {
      species: [
        { id: 'm', initialCount: 0 },
        { id: 'p', initialCount: 0 },
      ],
      reactions: [
        massAction('transcribe', '∅ → m', '0.5'),
        massAction('decay', 'm → ∅', '0.5'),
        massAction('translate', 'm → m + p'),
        massAction('degrade', 'p → ∅', '0.1'),
      ],
    };
    expect(found(twoStage, 'warning')).toEqual([]);
  });

  it('says that a local parameter shadows a name', () => {
    const document: NetworkDocument = {
      ...birthDeath,
      reactions: [{ ...massAction('r', 'X → ∅', 'death'), localParameters: [{ id: 'death', value: 2 }] }],
    };
    expect(found(document, 'information')).toContain('reactions[0].localParameters[0].id shadows');
  });
});
