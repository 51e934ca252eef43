/** Random sound network documents for property tests (fast-check): every feature of the document, values that mean something. */
import fc from 'fast-check';
import type { NetworkDocument, ReactionDocument, SpeciesDocument } from '@/domain/network/document.ts';
import { printEquation } from '@/domain/network/print-equation.ts';
import { printExpression } from '@/domain/network/print-expression.ts';
import { arbitraryExpression } from './arbitrary-expression.ts';

const compartments = ['cell', 'nucleus'];
const speciesIds = ['A', 'B', 'C', 'D'];
const parameterIds = ['k1', 'k2', 'k3'];

const species = (id: string): fc.Arbitrary<SpeciesDocument> =>
  fc.record({
    id: fc.constant(id),
    compartment: fc.constantFrom(...compartments),
    initialCount: fc.nat(500),
    boundary: fc.boolean(),
    meaning: fc.constantFrom('count' as const, 'concentration' as const),
  });

const side = fc
  .uniqueArray(fc.constantFrom(...speciesIds), { maxLength: 3 })
  .chain((ids) =>
    fc.tuple(...ids.map((id) => fc.integer({ min: 1, max: 3 }).map((count) => ({ species: id, count, position: 0 })))),
  );

/** Products and sums of what is never negative. */
const constant = fc.constantFrom(
  'k1',
  'k2 * 3',
  'k1 + k2',
  'k1 / cell',
  '2',
  'k3 / (2 * nucleus)',
  'exp(-k1)',
  'doubled',
);
const law = arbitraryExpression([...speciesIds, ...parameterIds, ...compartments, 'doubled', 'sum'])
  .map((expression) => printExpression(expression))
  .filter((text) => text.length < 500);

const reaction = (id: string): fc.Arbitrary<ReactionDocument> =>
  fc
    .record({
      reactants: side,
      products: side,
      rateLaw: fc.oneof(
        constant.map((text) => ({ kind: 'massAction' as const, constant: text })),
        law.map((text) => ({ kind: 'expression' as const, expression: text })),
      ),
      localParameters: fc.uniqueArray(
        fc.record({ id: fc.constantFrom('k1', 'k2', 'A', 'cell', 'own'), value: fc.integer({ min: 1, max: 9 }) }),
        { selector: ({ id: local }) => local, maxLength: 2 },
      ),
    })
    .filter(({ reactants, products }) => reactants.length + products.length > 0)
    .map(({ reactants, products, ...rest }) => ({
      id,
      equation: printEquation({ reactants, products, reversible: false }),
      ...rest,
    }));

/** Documents that pass every check. */
export const arbitraryNetwork: fc.Arbitrary<NetworkDocument> = fc.record({
  timeUnit: fc.constantFrom('s', 'h', 'generation'),
  compartments: fc.tuple(
    ...compartments.map((id) => fc.record({ id: fc.constant(id), size: fc.constantFrom(0.5, 1, 4) })),
  ),
  species: fc.tuple(...speciesIds.map(species)),
  parameters: fc.tuple(
    ...[...parameterIds, 'doubled', 'sum'].map((id) =>
      fc.record({
        id: fc.constant(id),
        value: fc.double({ min: 0, max: 100, noNaN: true }).map((value) => (value < 1e-9 ? 0 : value)),
      }),
    ),
  ),
  assignmentRules: fc.constant([
    { variable: 'doubled', expression: '2 * k2' },
    { variable: 'sum', expression: 'A + 2 * B + doubled' },
  ]),
  reactions: fc.tuple(reaction('r1'), reaction('r2'), reaction('r3')),
  observables: fc.constant([{ id: 'total', name: 'A and B', expression: 'A + B' }]),
});
