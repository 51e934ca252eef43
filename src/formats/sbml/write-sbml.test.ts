import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { arbitraryNetwork } from '@tests/factories/arbitrary-network.ts';
import { checkSbml } from '@tests/support/sbml-checker.ts';
import type { NetworkDocument } from '@/domain/network/document.ts';
import { writeSbml } from './write-sbml.ts';

const ordinary: NetworkDocument = {
  timeUnit: 'h',
  compartments: [{ id: 'cell', name: 'One cell', size: 1e-15, unit: 'L' }],
  species: [
    { id: 'A', name: 'Free & “active” <A>', compartment: 'cell', initialCount: 100 },
    { id: 'A2', compartment: 'cell', initialCount: 0, boundary: true, meaning: 'concentration' },
    { id: 'loose', initialCount: 3 },
    { id: 'ratio', initialCount: 0 },
  ],
  parameters: [
    { id: 'k', value: 0.25, unit: '1/h' },
    { id: 'level', value: 1 },
    { id: 'odd', value: 1, unit: 'furlong' },
  ],
  assignmentRules: [
    { variable: 'level', expression: 'A / (A + 50)' },
    { variable: 'ratio', expression: 'A / 2' },
  ],
  reactions: [
    { id: 'bind', equation: '2 A → A2', rateLaw: { kind: 'massAction', constant: 'k / cell' } },
    {
      id: 'part',
      equation: 'A2 → 2 A',
      rateLaw: { kind: 'massAction', constant: 'A2' },
      localParameters: [{ id: 'A2', value: 3 }],
    },
    { id: 'feed', equation: '∅ → A', rateLaw: { kind: 'expression', expression: 'k * loose * (A < 3)' } },
    { id: 'drop', equation: 'A → ∅', rateLaw: { kind: 'expression', expression: 'k' } },
  ],
  observables: [{ id: 'total', expression: 'A + 2 * A2 * cell' }],
};

describe('writeSbml', () => {
  const text = writeSbml(ordinary, { modelId: '01ABC-x', name: 'Dimer "test"' });

  it('writes Level 3 Version 2 with counts as pure numbers and an id that SBML takes', () => {
    expect(text).toContain('<sbml xmlns="http://www.sbml.org/sbml/level3/version2/core" level="3" version="2">');
    expect(text).toContain('<model id="model_01ABC_x" name="Dimer &quot;test&quot;" substanceUnits="dimensionless"');
  });

  it('writes mass action as ways of choosing: 2 A at c gives c·A·(A − 1)/2', () => {
    const flat = text.replaceAll('\n', '').replaceAll(' sbml:units="dimensionless"', '');
    expect(flat).toContain(
      '<apply><divide/><apply><times/><apply><times/><apply><divide/><ci>k</ci><ci>cell</ci></apply><ci>A</ci></apply>' +
        '<apply><minus/><ci>A</ci><cn type="integer">1</cn></apply></apply><cn type="integer">2</cn></apply>',
    );
  });

  it('lists a species that only the law uses as a modifier', () => {
    expect(text).toContain('<modifierSpeciesReference species="loose"/>');
  });

  it('renames a local parameter that would hide a reactant of the written law', () => {
    expect(text).toContain('<localParameter id="A2_local" value="3"/>');
  });

  it('leaves out what XML cannot hold', () => {
    const odd: NetworkDocument = {
      ...ordinary,
      species: [...ordinary.species, { id: 'Z', name: 'a\u0000b\ud800c\nd', initialCount: 0 }],
    };
    expect(writeSbml(odd, { modelId: 'm', name: 'm' })).toContain('name="abc&#10;d"');
  });

  it('throws on a document with unreadable parts rather than writing half of it', () => {
    const broken: NetworkDocument = {
      ...ordinary,
      reactions: [{ id: 'r', equation: 'A +', rateLaw: { kind: 'massAction', constant: 'k' } }],
    };
    expect(() => writeSbml(broken, { modelId: 'm', name: 'm' })).toThrow(TypeError);
  });

  const checked = it.runIf(checkSbml !== null);

  checked('passes the standard’s own checker without a finding where every unit is given, units included', () => {
    const enzyme: NetworkDocument = {
      timeUnit: 'min',
      compartments: [{ id: 'well', size: 2e-12, unit: 'L' }],
      species: [
        { id: 'E', compartment: 'well', initialCount: 10 },
        { id: 'S', compartment: 'well', initialCount: 100, meaning: 'concentration' },
        { id: 'D', compartment: 'well', initialCount: 0 },
        { id: 'loose', initialCount: 5 },
      ],
      parameters: [
        { id: 'kon', value: 1, unit: 'L/min' },
        { id: 'pair', value: 1, unit: '1/(molecule·min)' },
        { id: 'koff', value: 1, unit: '1/min' },
        { id: 'half', value: 3, unit: 'molecules/L' },
        { id: 'level', value: 0, unit: 'molecule' },
      ],
      assignmentRules: [{ variable: 'level', expression: 'E / (E + 20)' }],
      reactions: [
        { id: 'on', equation: 'E + S → D', rateLaw: { kind: 'expression', expression: 'kon * E * S' } },
        { id: 'twice', equation: '2 E + loose → D', rateLaw: { kind: 'massAction', constant: 'pair' } },
        {
          id: 'off',
          equation: 'D → E + S',
          rateLaw: { kind: 'massAction', constant: 'own' },
          localParameters: [{ id: 'own', value: 2, unit: '1/min' }],
        },
        { id: 'fall', equation: 'S → ∅', rateLaw: { kind: 'expression', expression: 'koff * level * S / (half + S)' } },
      ],
    };
    expect(checkSbml!([writeSbml(enzyme, { modelId: 'm', name: 'Enzyme' })])).toEqual([[]]);
  });

  checked('makes no error for the checker in any network (1 ordinary and 30 random, fixed seed)', () => {
    const random = fc.sample(arbitraryNetwork, { seed: 20261204, numRuns: 30 });
    const texts = [text, ...random.map((document) => writeSbml(document, { modelId: 'm', name: 'Random' }))];
    const errors = checkSbml!(texts).map((findings) => findings.filter(({ severity }) => severity !== 'Warning'));
    errors.forEach((findings, index) => expect(findings, texts[index]).toEqual([]));
  });
});
