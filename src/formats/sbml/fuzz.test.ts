import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { arbitraryNetwork } from '@tests/factories/arbitrary-network.ts';
import { checkNetwork } from '@/domain/network/check-network.ts';
import { readSbml } from './read-sbml.ts';
import { writeSbml } from './write-sbml.ts';

const fragments = [
  '<',
  '>',
  '/>',
  '</',
  '"',
  '&',
  '&amp;',
  '\u0000',
  '<math>',
  '<apply>',
  '<ci>A</ci>',
  '1e999',
  '-',
  'NaN',
  'listOfSpecies',
  '<!--',
  ']]>',
  ' id="A"',
  'k1',
  '<sep/>',
  '<lambda>',
];
const sound = fc
  .sample(arbitraryNetwork, { seed: 1, numRuns: 5 })
  .map((document) => writeSbml(document, { modelId: 'm', name: 'm' }));

/** A sound file with a few cuts, copies and odd pieces in it. */
const damaged = fc
  .tuple(
    fc.constantFrom(...sound),
    fc.array(
      fc.record({
        at: fc.double({ min: 0, max: 1, noNaN: true }),
        cut: fc.nat(60),
        put: fc.oneof(fc.constantFrom(...fragments), fc.string({ maxLength: 5 })),
      }),
      { minLength: 1, maxLength: 4 },
    ),
  )
  .map(([text, wounds]) =>
    wounds.reduce((current, { at, cut, put }) => {
      const place = Math.floor(at * current.length);
      return current.slice(0, place) + put + current.slice(place + cut);
    }, text),
  );

/** Damage inside attribute values and texts, where the file stays well-formed. */
const reworded = fc
  .tuple(
    fc.constantFrom(...sound),
    fc.constantFrom(
      'A',
      'k1',
      '2',
      'true',
      'false',
      'cell',
      'times',
      'plus',
      'ci',
      'cn',
      'species',
      'reaction',
      'piece',
    ),
    fc.constantFrom('B', 'r1', '-1', '0.5', '', 'and', 'apply', 'bvar', 'sep', 'lt'),
  )
  .map(([text, from, to]) => text.replaceAll(from, to));

describe('readSbml on damaged files', () => {
  it('answers each with a document or with problems, and never throws (5,000 damaged files, fixed seed)', () => {
    fc.assert(
      fc.property(fc.oneof(damaged, reworded), (text) => {
        const outcome = readSbml(text, { splitReversible: true, roundInitialCounts: true });
        if (outcome.ok) expect(Array.isArray(checkNetwork(outcome.document))).toBe(true);
        else expect(outcome.problems.length).toBeGreaterThan(0);
      }),
      { seed: 20261205, numRuns: 5_000 },
    );
  });
});
