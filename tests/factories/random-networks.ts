/** Randomly generated networks for property tests: mass action of every order, laws of every operator, rules and boundary species. */
import fc from 'fast-check';
import type { BinaryOperator, Expression, FunctionName } from '@/domain/network/expression.ts';
import type { ResolvedChange, ResolvedNetwork, ResolvedReaction } from '@/domain/network/resolved.ts';

const operators: BinaryOperator[] = ['add', 'subtract', 'multiply', 'divide', 'power', 'equal', 'notEqual'];
operators.push('less', 'lessOrEqual', 'greater', 'greaterOrEqual', 'and', 'or');
const oneArgument: FunctionName[] = ['exp', 'ln', 'log10', 'sqrt', 'abs', 'floor', 'ceil'];

/** Expressions over the given numbers of parameters and species. */
function expressions(parameters: number, species: number): fc.Arbitrary<Expression> {
  const leaf = fc.oneof(
    fc.constantFrom(0, 0.5, 1, 2, 3, -1, 10).map((value): Expression => ({ kind: 'number', value })),
    fc.nat(parameters - 1).map((index): Expression => ({ kind: 'parameter', index })),
    ...(species > 0 ? [fc.nat(species - 1).map((index): Expression => ({ kind: 'species', index }))] : []),
  );
  const { tree } = fc.letrec<{ tree: Expression }>((tie) => ({
    tree: fc.oneof(
      { depthSize: 'small', withCrossShrink: true },
      leaf,
      fc.record({
        kind: fc.constant('unary' as const),
        operator: fc.constantFrom('negate' as const, 'not' as const),
        operand: tie('tree'),
      }),
      fc.record({
        kind: fc.constant('binary' as const),
        operator: fc.constantFrom(...operators),
        left: tie('tree'),
        right: tie('tree'),
      }),
      fc.record({
        kind: fc.constant('call' as const),
        name: fc.constantFrom(...oneArgument),
        arguments: fc.tuple(tie('tree')),
      }),
      fc.record({
        kind: fc.constant('call' as const),
        name: fc.constantFrom('min' as const, 'max' as const),
        arguments: fc.array(tie('tree'), { minLength: 1, maxLength: 3 }),
      }),
      fc.record({
        kind: fc.constant('piecewise' as const),
        pieces: fc.array(fc.record({ value: tie('tree'), condition: tie('tree') }), { minLength: 1, maxLength: 2 }),
        otherwise: tie('tree'),
      }),
    ),
  }));
  return tree;
}

const absolute = (expression: Expression): Expression => ({ kind: 'call', name: 'abs', arguments: [expression] });

/** Timed and triggered changes of counts and parameters, the former mostly whole. */
function changes(
  parameters: number,
  species: number,
  withRules: number,
  kinds: 'timed' | 'any',
): fc.Arbitrary<ResolvedChange[]> {
  const value = expressions(withRules, species);
  const whole = (expression: Expression): Expression => ({
    kind: 'call',
    name: 'min',
    arguments: [
      { kind: 'call', name: 'floor', arguments: [absolute(expression)] },
      { kind: 'number', value: 500 },
    ],
  });
  const set = fc.oneof(
    { weight: 6, arbitrary: fc.tuple(fc.nat(species - 1), value.map(whole)) },
    { weight: 1, arbitrary: fc.tuple(fc.nat(species - 1), value) },
  );
  const ofSpecies = set.map(([index, expression]) => ({ target: { kind: 'species' as const, index }, expression }));
  const ofParameter = fc.tuple(fc.nat(parameters - 1), value).map(([index, expression]) => ({
    target: { kind: 'parameter' as const, index },
    expression: {
      kind: 'call' as const,
      name: 'min' as const,
      arguments: [absolute(expression), { kind: 'number' as const, value: 9 }],
    },
  }));
  const timed = fc
    .array(fc.constantFrom(0, 0.001, 0.01, 0.1, 0.3, 1, 2, 7.5, 30), { minLength: 1, maxLength: 4 })
    .map((times) => ({ kind: 'times' as const, times }));
  const triggered = fc.record({ left: value, right: value, before: fc.boolean() }).map(({ left, right, before }) => ({
    kind: 'condition' as const,
    condition: { kind: 'binary' as const, operator: 'greater' as const, left, right },
    before,
  }));
  const when = kinds === 'timed' ? timed : fc.oneof(timed, triggered);
  const sets = fc.uniqueArray(fc.oneof(ofSpecies, ofParameter), {
    selector: ({ target }) => `${target.kind} ${target.index}`,
    minLength: 1,
    maxLength: 2,
  });
  return fc
    .array(fc.record({ when, sets }), { maxLength: 4 })
    .map((drawn) => drawn.map((change, index) => ({ id: `change${index}`, ...change })));
}

/** Any network that the engine accepts; `tame` keeps laws from going negative, so that most replicates run to the end. */
export function networks(options: {
  tame: boolean;
  changes?: 'none' | 'timed' | 'any';
}): fc.Arbitrary<ResolvedNetwork> {
  const sizes = fc.record({
    species: fc.integer({ min: 1, max: 5 }),
    parameters: fc.integer({ min: 1, max: 4 }),
    rules: fc.nat(2),
  });
  return sizes.chain(({ species, parameters, rules }) => {
    const stoichiometry = fc.uniqueArray(
      fc.record({
        species: fc.nat(species - 1),
        count: fc.oneof(
          { weight: 5, arbitrary: fc.integer({ min: 1, max: 3 }) },
          { weight: 1, arbitrary: fc.constant(11) },
        ),
      }),
      { selector: (entry) => entry.species, maxLength: 3 },
    );
    const anyLaw = expressions(parameters + rules, species);
    const law = fc.oneof(
      {
        weight: 2,
        arbitrary: expressions(parameters, 0).map((constant) => ({
          kind: 'massAction' as const,
          constant: options.tame ? absolute(constant) : constant,
        })),
      },
      {
        weight: 1,
        arbitrary: anyLaw.map((expression) => ({
          kind: 'expression' as const,
          expression: options.tame ? absolute(expression) : expression,
        })),
      },
    );
    const sketch = fc.record({ reactants: stoichiometry, products: stoichiometry, law });
    return fc
      .record({
        counts: fc.array(fc.oneof(fc.integer({ min: 0, max: 60 }), fc.integer({ min: 0, max: 100_000 })), {
          minLength: species,
          maxLength: species,
        }),
        boundary: fc.array(fc.boolean(), { minLength: species, maxLength: species }),
        values: fc.array(fc.constantFrom(0, 0.01, 0.3, 1, 1.7, 2, 5, -0.5), {
          minLength: parameters,
          maxLength: parameters,
        }),
        rules: fc.array(expressions(parameters, species), { minLength: rules, maxLength: rules }),
        reactions: fc.array(sketch, { minLength: 1, maxLength: 8 }),
        observable: expressions(parameters + rules, species),
        changes:
          (options.changes ?? 'none') === 'none'
            ? fc.constant<ResolvedChange[]>([])
            : changes(parameters, species, parameters + rules, options.changes as 'timed' | 'any'),
      })
      .map((drawn): ResolvedNetwork => ({
        ...(drawn.changes.length > 0 ? { changes: drawn.changes } : {}),
        species: drawn.counts.map((initialCount, i) => ({
          id: `S${i}`,
          initialCount,
          boundary: drawn.boundary[i]! && i > 0,
        })),
        parameters: [...drawn.values, ...drawn.rules.map(() => 0)].map((value, i) => ({ id: `p${i}`, value })),
        assignments: drawn.rules.map((expression, i) => ({ parameter: parameters + i, expression })),
        reactions: drawn.reactions.map(({ reactants, products, law: drawnLaw }, i): ResolvedReaction => {
          const of = (list: typeof reactants, at: number): number =>
            list.find((entry) => entry.species === at)?.count ?? 0;
          const changes = drawn.counts
            .map((_, at) => ({
              species: at,
              count: drawn.boundary[at] && at > 0 ? 0 : of(products, at) - of(reactants, at),
            }))
            .filter(({ count }) => count !== 0);
          return { id: `R${i}`, reactants, changes, law: drawnLaw };
        }),
        observables: [
          ...drawn.counts.map((_, index) => ({ id: `S${index}`, expression: { kind: 'species' as const, index } })),
          {
            id: 'named',
            expression: {
              kind: 'call',
              name: 'min',
              arguments: [absolute(drawn.observable), { kind: 'number', value: 1e6 }],
            },
          },
        ],
      }));
  });
}
