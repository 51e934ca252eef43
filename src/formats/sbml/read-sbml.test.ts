/** The traps of SBML: each expectation below was derived by hand from the standard's rules (SBML Level 3 Version 2 core; from memory). */
import { describe, expect, it } from 'vitest';
import type { NetworkDocument } from '@/domain/network/document.ts';
import { parameterValuesAt } from '@/domain/network/parameter-values.ts';
import { lawValue } from '@/domain/network/propensity.ts';
import { resolveNetwork } from '@/domain/network/resolve-network.ts';
import { readSbml, type ReadSbmlOptions } from './read-sbml.ts';

const mathml = 'xmlns="http://www.w3.org/1998/Math/MathML"';
const math = (content: string): string => `<math ${mathml}>${content}</math>`;
const times = (...names: string[]): string =>
  `<apply><times/>${names.map((name) => (/^[\d.]+$/.test(name) ? `<cn>${name}</cn>` : `<ci>${name}</ci>`)).join('')}</apply>`;

const level3 = (model: string, modelAttributes = '', sbmlAttributes = ''): string =>
  `<?xml version="1.0" encoding="UTF-8"?><sbml xmlns="http://www.sbml.org/sbml/level3/version2/core" level="3" version="2" ${sbmlAttributes}><model id="m" ${modelAttributes}>${model}</model></sbml>`;
const level2 = (model: string): string =>
  `<sbml xmlns="http://www.sbml.org/sbml/level2/version4" level="2" version="4"><model id="m">${model}</model></sbml>`;

const compartments = (size: string | null = '2'): string =>
  `<listOfCompartments><compartment id="V" ${size === null ? '' : `size="${size}"`} spatialDimensions="3" constant="true"/></listOfCompartments>`;
const species = (id: string, attributes: string): string =>
  `<species id="${id}" compartment="V" boundaryCondition="false" constant="false" ${attributes}/>`;
const amounts = (...ids: string[]): string =>
  `<listOfSpecies>${ids.map((id) => species(id, 'hasOnlySubstanceUnits="true" initialAmount="10"')).join('')}</listOfSpecies>`;
const parameters = (...pairs: [string, number][]): string =>
  `<listOfParameters>${pairs.map(([id, value]) => `<parameter id="${id}" value="${value}" constant="true"/>`).join('')}</listOfParameters>`;
const side = (list: string, terms: [string, number][]): string =>
  terms.length === 0
    ? ''
    : `<${list}>${terms.map(([id, count]) => `<speciesReference species="${id}" stoichiometry="${count}" constant="true"/>`).join('')}</${list}>`;
const reaction = (
  reactants: [string, number][],
  products: [string, number][],
  law: string,
  more = '',
  attributes = 'reversible="false"',
): string =>
  `<listOfReactions><reaction id="r" ${attributes}>${side('listOfReactants', reactants)}${side('listOfProducts', products)}<kineticLaw>${math(law)}${more}</kineticLaw></reaction></listOfReactions>`;

const read = (text: string, options?: ReadSbmlOptions) => {
  const outcome = readSbml(text, options);
  if (!outcome.ok) throw new Error(JSON.stringify(outcome.problems, null, 1));
  return outcome;
};
const document = (text: string, options?: ReadSbmlOptions): NetworkDocument => read(text, options).document;
const problems = (text: string, options?: ReadSbmlOptions) => {
  const outcome = readSbml(text, options);
  return outcome.ok ? [] : outcome.problems;
};
const codes = (text: string, options?: ReadSbmlOptions): string[] => problems(text, options).map(({ code }) => code);
/** Propensity of the only reaction in the initial state. */
const propensity = (text: string): number => {
  const outcome = resolveNetwork(document(text));
  if (!outcome.ok) throw new Error(JSON.stringify(outcome.problems));
  const counts = outcome.network.species.map(({ initialCount }) => initialCount);
  return lawValue(outcome.network.reactions[0]!, counts, parameterValuesAt(outcome.network, counts));
};
/** Codes of the notes but for the one that counts laws read as mass action. */
const notes = (text: string): string[] =>
  read(text)
    .notes.map(({ code }) => code)
    .filter((code) => code !== 'read_as_mass_action');
const lawOf = (text: string) => document(text).reactions[0]!.rateLaw;

describe('readSbml: what a model means', () => {
  it('reads A + B with V·k·[A]·[B] as mass action with c = k / V', () => {
    const text = level3(
      compartments() +
        `<listOfSpecies>${species('A', 'hasOnlySubstanceUnits="false" initialAmount="10"')}${species('B', 'hasOnlySubstanceUnits="false" initialConcentration="3"')}</listOfSpecies>` +
        parameters(['k', 0.5]) +
        reaction(
          [
            ['A', 1],
            ['B', 1],
          ],
          [],
          times('V', 'k', 'A', 'B'),
        ),
    );
    // 3 per unit of volume in a volume of 2 are 6 molecules; 0.5 / 2 · 10 · 6 = 15.
    expect(document(text).species.map(({ initialCount }) => initialCount)).toEqual([10, 6]);
    expect(lawOf(text)).toEqual({ kind: 'massAction', constant: 'k / V' });
    expect(propensity(text)).toBe(15);
  });

  it('keeps 2 A with V·k·[A]² as it is, since that is not c·x·(x − 1)/2', () => {
    const text = level3(
      compartments() +
        `<listOfSpecies>${species('A', 'hasOnlySubstanceUnits="false" initialAmount="10"')}</listOfSpecies>` +
        parameters(['k', 0.5]) +
        reaction([['A', 2]], [], times('V', 'k', 'A', 'A')),
    );
    expect(lawOf(text)).toEqual({ kind: 'expression', expression: 'V * k * A * A' });
    // 2 · 0.5 · (10/2)² = 25; the combinatorial form with c = 2k/V would give 0.5 · 45 = 22.5.
    expect(propensity(text)).toBe(25);
  });

  it('recognises c·x·(x − 1)/2 and c·x·(x − 1)·(x − 2)/6 · y', () => {
    const less = (taken: number) => `<apply><minus/><ci>A</ci><cn>${taken}</cn></apply>`;
    const pair = `<apply><divide/><apply><times/><ci>k</ci><ci>A</ci>${less(1)}</apply><cn>2</cn></apply>`;
    const two = level3(compartments() + amounts('A') + parameters(['k', 0.5]) + reaction([['A', 2]], [], pair));
    expect(lawOf(two)).toEqual({ kind: 'massAction', constant: 'k' });
    expect(propensity(two)).toBe(0.5 * 45);
    const triple = `<apply><divide/><apply><times/><ci>A</ci>${less(2)}<ci>B</ci>${less(1)}<ci>k</ci></apply><cn>6</cn></apply>`;
    const three = level3(
      compartments() +
        amounts('A', 'B') +
        parameters(['k', 1]) +
        reaction(
          [
            ['A', 3],
            ['B', 1],
          ],
          [],
          triple,
        ),
    );
    expect(lawOf(three)).toEqual({ kind: 'massAction', constant: 'k' });
    expect(propensity(three)).toBe(120 * 10);
    const withoutHalf = `<apply><times/><ci>k</ci><ci>A</ci>${less(1)}</apply>`;
    expect(
      lawOf(level3(compartments() + amounts('A') + parameters(['k', 1]) + reaction([['A', 2]], [], withoutHalf))).kind,
    ).toBe('expression');
  });

  it('lets hasOnlySubstanceUnits decide what the id means, whichever attribute set the value', () => {
    const with_ = (flag: boolean, initial: string) =>
      level3(
        compartments() +
          `<listOfSpecies>${species('A', `hasOnlySubstanceUnits="${flag}" ${initial}`)}</listOfSpecies>` +
          parameters(['k', 1]) +
          reaction([['A', 1]], [], times('k', 'A')),
      );
    expect(propensity(with_(true, 'initialAmount="10"'))).toBe(10);
    expect(propensity(with_(true, 'initialConcentration="5"'))).toBe(10);
    expect(propensity(with_(false, 'initialAmount="10"'))).toBe(5);
    expect(propensity(with_(false, 'initialConcentration="5"'))).toBe(5);
  });

  it('accepts an unset compartment size while every species is in substance units, and says where it is missing otherwise', () => {
    expect(
      document(
        level3(compartments(null) + amounts('A') + parameters(['k', 1]) + reaction([['A', 1]], [], times('k', 'A'))),
      ).compartments,
    ).toEqual([{ id: 'V', size: null }]);
    const concentration = level3(
      compartments(null) +
        `<listOfSpecies>${species('A', 'hasOnlySubstanceUnits="false" initialConcentration="5"')}</listOfSpecies>` +
        parameters(['k', 1]) +
        reaction([['A', 1]], [], times('k', 'A')),
    );
    expect(codes(concentration)).toEqual(['unknown_initial_value']);
  });

  it('lets a local parameter shadow a global one, in Levels 2 and 3', () => {
    const local3 = '<listOfLocalParameters><localParameter id="k" value="7"/></listOfLocalParameters>';
    expect(
      propensity(
        level3(
          compartments() + amounts('A') + parameters(['k', 1]) + reaction([['A', 1]], [], times('k', 'A'), local3),
        ),
      ),
    ).toBe(70);
    const local2 = '<listOfParameters><parameter id="k" value="7"/></listOfParameters>';
    const listed =
      '<listOfReactions><reaction id="r" reversible="false"><listOfReactants><speciesReference species="A"/></listOfReactants>';
    const two = level2(
      compartments().replace('constant="true"', '') +
        amounts('A') +
        parameters(['k', 1]) +
        `${listed}<kineticLaw>${math(times('k', 'A'))}${local2}</kineticLaw></reaction></listOfReactions>`,
    );
    expect(propensity(two)).toBe(70);
    expect(notes(two)).toEqual(['substance_unit_assumed']);
  });

  it('writes function definitions out, nested and with arguments swapped', () => {
    const functions =
      `<listOfFunctionDefinitions><functionDefinition id="f">${math('<lambda><bvar><ci>x</ci></bvar><bvar><ci>y</ci></bvar><apply><minus/><ci>x</ci><ci>y</ci></apply></lambda>')}</functionDefinition>` +
      `<functionDefinition id="g">${math('<lambda><bvar><ci>y</ci></bvar><bvar><ci>x</ci></bvar><apply><times/><cn>2</cn><apply><ci>f</ci><ci>x</ci><ci>y</ci></apply></apply></lambda>')}</functionDefinition></listOfFunctionDefinitions>`;
    // g(1, A) = 2·f(A, 1) = 2·(A − 1) = 18.
    const text = level3(
      functions +
        compartments() +
        amounts('A') +
        reaction([], [['A', 1]], '<apply><ci>g</ci><cn>1</cn><ci>A</ci></apply>'),
    );
    expect(lawOf(text)).toEqual({ kind: 'expression', expression: '2 * (A - 1)' });
    expect(propensity(text)).toBe(18);
  });

  it('works initial assignments out, through rules and sizes, and says so', () => {
    const initial = `<listOfInitialAssignments><initialAssignment symbol="A">${math('<apply><plus/><ci>q</ci><cn>1</cn></apply>')}</initialAssignment><initialAssignment symbol="k">${math(times('2', 'V'))}</initialAssignment></listOfInitialAssignments>`;
    const rules = `<listOfRules><assignmentRule variable="q">${math(times('k', '3'))}</assignmentRule></listOfRules>`;
    const q = '<parameter id="q" constant="false"/>';
    // k = 2·2 = 4; q = 12; [A] = 13, so 26 molecules in a volume of 2.
    const text = level3(
      compartments() +
        `<listOfSpecies>${species('A', 'hasOnlySubstanceUnits="false"')}</listOfSpecies>` +
        parameters(['k', 99]).replace('</listOfParameters>', `${q}</listOfParameters>`) +
        initial +
        rules +
        reaction([['A', 1]], [], times('k', 'A')),
    );
    expect(document(text).species[0]!.initialCount).toBe(26);
    expect(document(text).parameters!.find(({ id }) => id === 'k')!.value).toBe(4);
    expect(propensity(text)).toBe(4 * 13);
    expect(read(text).notes.filter(({ code }) => code === 'initial_assignment_evaluated')).toHaveLength(2);
  });

  it('keeps assignment rules as rules, for parameters and species', () => {
    const rules = `<listOfRules><assignmentRule variable="B">${math(times('A', '3'))}</assignmentRule></listOfRules>`;
    const text = level3(compartments() + amounts('A', 'B') + rules + reaction([['A', 1]], [], times('B', '1')));
    expect(document(text).assignmentRules).toEqual([{ variable: 'B', expression: 'A * 3' }]);
    expect(propensity(text)).toBe(30);
  });

  it('keeps boundary species as sources and sinks, and constant ones too', () => {
    const source = species('S', 'hasOnlySubstanceUnits="true" initialAmount="4"').replace(
      'boundaryCondition="false"',
      'boundaryCondition="true"',
    );
    const text = level3(
      compartments() +
        `<listOfSpecies>${source}${species('A', 'hasOnlySubstanceUnits="true" initialAmount="0"')}</listOfSpecies>` +
        parameters(['k', 1]) +
        reaction([['S', 1]], [['A', 1]], times('k', 'S')),
    );
    const outcome = resolveNetwork(document(text));
    expect(outcome.ok && outcome.network.reactions[0]!.changes).toEqual([{ species: 1, count: 1 }]);
    const constantOnly = text.replace(
      'boundaryCondition="true" constant="false"',
      'boundaryCondition="false" constant="true"',
    );
    expect(codes(constantOnly)).toEqual(['constant_species']);
  });

  it('reads a species on both sides, and adds up repeated references', () => {
    const text = level3(
      compartments() +
        amounts('A', 'B') +
        parameters(['k', 1]) +
        reaction(
          [['A', 1]],
          [
            ['A', 1],
            ['B', 1],
            ['B', 2],
          ],
          times('k', 'A'),
        ),
    );
    expect(document(text).reactions[0]!.equation).toBe('A → A + 3 B');
  });

  it('converts moles to molecules: 1e-21 mol are 602.214076 molecules, rounded only when agreed', () => {
    const text = level3(
      compartments() +
        `<listOfSpecies>${species('A', 'hasOnlySubstanceUnits="true" initialAmount="1e-21"')}</listOfSpecies>` +
        parameters(['k', 3]) +
        reaction([['A', 1]], [], times('k', 'A')),
      'substanceUnits="mole"',
    );
    expect(problems(text).map(({ code, message }) => [code, /Round it to 602\?/.test(message)])).toEqual([
      ['non_integer_count', true],
    ]);
    const rounded = document(text, { roundInitialCounts: true });
    expect(rounded.species[0]!.initialCount).toBe(602);
    // N_A · k · (count / N_A) is k · count.
    expect(rounded.reactions[0]!.rateLaw).toEqual({ kind: 'massAction', constant: 'k' });
  });

  it('takes a product that misses a whole number by rounding as that number: 0.1 in 30 is 3', () => {
    const text = level3(
      compartments('30') +
        `<listOfSpecies>${species('A', 'hasOnlySubstanceUnits="false" initialConcentration="0.1"')}</listOfSpecies>` +
        parameters(['k', 1]) +
        reaction([['A', 1]], [], times('k', 'A')),
    );
    expect(document(text).species[0]!.initialCount).toBe(3);
  });

  it('renames ids that are words of the expression language, everywhere', () => {
    const text = level3(
      compartments() + amounts('and') + parameters(['time', 2]) + reaction([['and', 1]], [], times('time', 'and')),
    );
    expect(document(text).reactions[0]).toMatchObject({
      equation: 'and_ → ∅',
      rateLaw: { kind: 'massAction', constant: 'time_' },
    });
    expect(notes(text)).toEqual(['renamed', 'renamed']);
  });

  it('reads units as words', () => {
    const units =
      '<listOfUnitDefinitions><unitDefinition id="u1"><listOfUnits><unit kind="second" exponent="-1" scale="0" multiplier="1"/></listOfUnits></unitDefinition>' +
      '<unitDefinition id="u2"><listOfUnits><unit kind="second" exponent="1" scale="0" multiplier="3600"/></listOfUnits></unitDefinition></listOfUnitDefinitions>';
    const text = level3(
      units +
        compartments().replace('constant', 'units="litre" constant') +
        amounts('A') +
        parameters(['k', 1]).replace('constant', 'units="u1" constant') +
        reaction([['A', 1]], [], times('k', 'A')),
      'timeUnits="u2"',
    );
    expect(document(text)).toMatchObject({
      timeUnit: 'h',
      compartments: [{ unit: 'L' }],
      parameters: [{ unit: '1/s' }],
    });
  });

  it('reads numbers in every notation of MathML', () => {
    const law =
      '<apply><plus/><cn type="e-notation">1.5<sep/>2</cn><cn type="rational">1<sep/>4</cn><cn type="integer"> 3 </cn><cn>-1e0</cn></apply>';
    expect(propensity(level3(compartments() + amounts('A') + reaction([], [['A', 1]], law)))).toBe(150 + 0.25 + 3 - 1);
  });

  it.each([
    ['<apply><log/><cn>1000</cn></apply>', 3],
    ['<apply><log/><logbase><cn>2</cn></logbase><cn>8</cn></apply>', 3],
    ['<apply><root/><cn>16</cn></apply>', 4],
    ['<apply><root/><degree><cn>3</cn></degree><cn>27</cn></apply>', 3],
    ['<apply><plus/></apply>', 0],
    ['<apply><times/></apply>', 1],
    ['<apply><lt/><cn>1</cn><cn>2</cn><cn>3</cn></apply>', 1],
    ['<apply><xor/><true/><true/><true/></apply>', 1],
    ['<apply><implies/><true/><false/></apply>', 0],
    [
      '<piecewise><piece><cn>5</cn><apply><geq/><ci>A</ci><cn>10</cn></apply></piece><otherwise><cn>1</cn></otherwise></piecewise>',
      5,
    ],
    ['<pi/>', Math.PI],
    ['<semantics><cn>4</cn><annotation encoding="x">4</annotation></semantics>', 4],
  ])('reads %s as %f', (law, value) => {
    expect(propensity(level3(compartments() + amounts('A') + reaction([], [['A', 1]], law)))).toBeCloseTo(value, 12);
  });
});

describe('readSbml: reversible reactions', () => {
  const both =
    '<apply><times/><ci>V</ci><apply><minus/><apply><times/><ci>k</ci><ci>A</ci></apply><apply><times/><ci>q</ci><ci>B</ci></apply></apply></apply>';
  const text = level3(
    compartments() +
      amounts('A', 'B') +
      parameters(['k', 1], ['q', 3]) +
      reaction([['A', 1]], [['B', 1]], both, '', 'reversible="true"'),
  );

  it('are refused when the law may go negative, with the two laws to split into', () => {
    const [problem] = problems(text);
    expect(problem).toMatchObject({ code: 'reversible_reaction', path: 'sbml/model[m]/listOfReactions/reaction[r]' });
    expect(problem!.message).toContain('Forward: V * (k * A); backward: V * (q * B)');
  });

  it('are split when agreed', () => {
    const { reactions } = document(text, { splitReversible: true });
    expect(reactions).toEqual([
      { id: 'r_forward', equation: 'A → B', rateLaw: { kind: 'massAction', constant: 'V * k' } },
      { id: 'r_backward', equation: 'B → A', rateLaw: { kind: 'massAction', constant: 'V * q' } },
    ]);
  });

  it('run forward when the law cannot be negative, and that is said', () => {
    const forward = level3(
      compartments() +
        amounts('A', 'B') +
        parameters(['k', 1]) +
        reaction([['A', 1]], [['B', 1]], times('k', 'A'), '', 'reversible="true"'),
    );
    expect(document(forward).reactions).toHaveLength(1);
    expect(notes(forward)).toEqual(['reversible_in_name']);
  });
});

describe('readSbml: refusals by name', () => {
  const sound = reaction([['A', 1]], [], times('k', 'A'));
  const rest = compartments() + amounts('A') + parameters(['k', 1]);
  const with_ = (more: string, attributes = '', root = '') => level3(rest + more, attributes, root);
  const rule = (name: string) => `<listOfRules><${name} variable="k">${math('<cn>1</cn>')}</${name}></listOfRules>`;
  const event = (inside: string) =>
    `<listOfEvents><event id="dose" useValuesFromTriggerTime="true"><trigger initialValue="true" persistent="true">${math('<true/>')}</trigger>${inside}</event></listOfEvents>`;
  const packaged = (required: boolean) =>
    `xmlns:comp="http://www.sbml.org/sbml/level3/version1/comp/version1" comp:required="${required}"`;
  const applied = (inside: string) => with_(reaction([['A', 1]], [], inside));
  const symbol = (name: string) =>
    `<csymbol encoding="text" definitionURL="http://www.sbml.org/sbml/symbols/${name}">t</csymbol>`;

  const cases: [string, string, string][] = [
    ['a rate rule', with_(rule('rateRule') + sound), 'rate_rule'],
    ['an algebraic rule', with_(rule('algebraicRule') + sound), 'algebraic_rule'],
    [
      'a rule for a compartment',
      with_(`<listOfRules><assignmentRule variable="V">${math('<cn>1</cn>')}</assignmentRule></listOfRules>${sound}`),
      'variable_compartment',
    ],
    ['an event with delay', with_(sound + event(`<delay>${math('<cn>1</cn>')}</delay>`)), 'event_delay'],
    ['a fast reaction', with_(sound.replace('reversible="false"', 'reversible="false" fast="true"')), 'fast_reaction'],
    ['a conversion factor', with_(sound, 'conversionFactor="k"'), 'conversion_factor'],
    ['a required package', with_(sound, '', packaged(true)), 'required_package'],
    ['the symbol time', applied(symbol('time')), 'symbol_time'],
    ['the symbol delay', applied(`<apply>${symbol('delay')}<ci>A</ci><cn>1</cn></apply>`), 'symbol_delay'],
    ['the symbol rateOf', applied(`<apply>${symbol('rateOf')}<ci>A</ci></apply>`), 'symbol_rateOf'],
    ['a trigonometric function', applied('<apply><sin/><ci>A</ci></apply>'), 'unsupported_math'],
    ['a factorial', applied('<apply><factorial/><ci>A</ci></apply>'), 'unsupported_math'],
    ['a reaction in a law', applied('<ci>r</ci>'), 'reaction_in_expression'],
    ['an unknown name', applied(times('k', 'nothing')), 'unknown_name'],
    ['a missing kinetic law', with_(sound.replace(/<kineticLaw>.*<\/kineticLaw>/, '')), 'missing_kinetic_law'],
    ['a law without mathematics', with_(sound.replace(/<math.*<\/math>/, '')), 'missing_math'],
    [
      'stoichiometry that is not whole',
      with_(sound.replace('stoichiometry="1"', 'stoichiometry="0.5"')),
      'non_integer_stoichiometry',
    ],
    [
      'stoichiometry that is negative',
      with_(sound.replace('stoichiometry="1"', 'stoichiometry="-1"')),
      'negative_stoichiometry',
    ],
    ['stoichiometry that is not set', with_(sound.replace('stoichiometry="1"', '')), 'missing_attribute'],
    [
      'stoichiometry by a rule',
      with_(`<listOfRules><assignmentRule variable="ref">${math('<cn>1</cn>')}</assignmentRule></listOfRules>${sound}`),
      'unknown_name',
    ],
    [
      'a species without a value',
      level3(compartments() + amounts('A').replace('initialAmount="10"', '') + parameters(['k', 1]) + sound),
      'missing_initial_value',
    ],
    [
      'a count that is not whole',
      level3(compartments() + amounts('A').replace('"10"', '"2.5"') + parameters(['k', 1]) + sound),
      'non_integer_count',
    ],
    [
      'a negative count',
      level3(compartments() + amounts('A').replace('"10"', '"-3"') + parameters(['k', 1]) + sound),
      'negative_count',
    ],
    [
      'a parameter without a value',
      level3(compartments() + amounts('A') + parameters(['k', 1]).replace('value="1"', '') + sound),
      'missing_value',
    ],
    [
      'a value that is no number',
      level3(compartments() + amounts('A') + parameters(['k', 1]).replace('value="1"', 'value="fast"') + sound),
      'invalid_attribute',
    ],
    ['a species in an unknown compartment', level3(amounts('A') + parameters(['k', 1]) + sound), 'unknown_compartment'],
    ['an id taken twice', level3(compartments() + amounts('A', 'A') + parameters(['k', 1]) + sound), 'duplicate_id'],
    ['an element without a place', with_(`<listOfWishes/>${sound}`), 'unexpected_element'],
    [
      'initial assignments in a circle',
      with_(
        `<listOfInitialAssignments><initialAssignment symbol="k">${math(times('k', '2'))}</initialAssignment></listOfInitialAssignments>${sound}`,
      ),
      'cyclic_assignments',
    ],
    [
      'mixed units of substance',
      level3(
        compartments() +
          amounts('A', 'B')
            .replace('<species', '<species substanceUnits="mole"')
            .replace(/<species id="B"/, '<species substanceUnits="item" id="B"') +
          parameters(['k', 1]) +
          sound,
      ),
      'substance_unit',
    ],
    ['a unit of substance that is a mass', with_(sound, 'substanceUnits="gram"'), 'substance_unit'],
  ];
  it.each(cases)('%s', (_, text, code) => {
    const found = problems(text);
    expect(found.map((problem) => problem.code)).toContain(code);
    for (const { path, message, severity } of found) {
      expect(severity).toBe('error');
      expect(path).toMatch(/^sbml/);
      expect(message).toMatch(/\(line \d+, column \d+\)$/);
    }
  });

  it('mentions optional packages, constraints and types without refusing them', () => {
    const text = with_(
      `<listOfConstraints><constraint>${math('<true/>')}</constraint></listOfConstraints>${sound}`,
      '',
      packaged(false),
    );
    expect(notes(text)).toEqual(['optional_package', 'constraints_ignored']);
  });

  it('lists every fault of a file, not only the first, each at its line', () => {
    const text = with_(
      `\n${rule('rateRule')}\n${sound.replace('stoichiometry="1"', 'stoichiometry="1.5"')}\n${event('')}`,
    );
    expect(problems(text).map(({ code, message }) => [code, /line (\d+)/.exec(message)![1]])).toEqual([
      ['rate_rule', '2'],
      ['empty_change', '4'],
      ['non_integer_stoichiometry', '3'],
    ]);
  });
});

describe('readSbml: hostile and broken files', () => {
  it('refuses a document type, and so every entity bomb, at once', () => {
    const bomb = `<?xml version="1.0"?><!DOCTYPE lolz [<!ENTITY a "aaaaaaaaaa"><!ENTITY b "&a;&a;&a;&a;&a;&a;&a;&a;&a;&a;">]>${level3(amounts('A'))}`;
    expect(codes(bomb)).toEqual(['document_type_refused']);
    expect(codes('<!DOCTYPE sbml SYSTEM "file:///etc/passwd"><sbml/>')).toEqual(['document_type_refused']);
  });

  it('refuses entities beyond the five of XML', () => {
    expect(codes(level3('<listOfSpecies>&nbsp;</listOfSpecies>'))).toEqual(['not_xml']);
  });

  it('refuses deep nesting, inside annotations too, and great size', () => {
    const deep = problems(level3('<a>'.repeat(100_000)));
    expect(deep.map(({ code }) => code)).toEqual(['nested_too_deep']);
    const nestedMath = problems(
      level3(
        compartments() +
          amounts('A') +
          reaction([['A', 1]], [], '<apply><minus/>'.repeat(190) + '<ci>A</ci>' + '</apply>'.repeat(190)),
      ),
    );
    expect(nestedMath.map(({ code }) => code)).toEqual(['expression_too_deep']);
    expect(codes(' '.repeat(10_000_001))).toEqual(['file_too_large']);
    const skipped = problems(level3(`<annotation>${'<x:a xmlns:x="urn:x">'.repeat(1_000)}</annotation>`));
    expect(skipped.map(({ code }) => code)).toEqual(['nested_too_deep']);
  });

  it('refuses functions that blow up when written out', () => {
    const doubling = (index: number) =>
      `<functionDefinition id="f${index}">${math(`<lambda><bvar><ci>x</ci></bvar><apply><plus/>${`<apply><ci>f${index - 1}</ci><ci>x</ci></apply>`.repeat(10)}</apply></lambda>`)}</functionDefinition>`;
    const functions = `<listOfFunctionDefinitions><functionDefinition id="f0">${math('<lambda><bvar><ci>x</ci></bvar><ci>x</ci></lambda>')}</functionDefinition>${[1, 2, 3, 4, 5, 6, 7, 8, 9].map(doubling).join('')}</listOfFunctionDefinitions>`;
    const found = problems(
      level3(
        functions + compartments() + amounts('A') + reaction([['A', 1]], [], '<apply><ci>f9</ci><ci>A</ci></apply>'),
      ),
    );
    expect(found.map(({ code }) => code)).toContain('function_too_large');
  });

  it('answers 100,000 reactions with one problem', () => {
    const one = '<reaction id="r" reversible="false"/>';
    expect(codes(level3(`<listOfReactions>${one.repeat(100_000)}</listOfReactions>`))).toEqual(['too_many']);
  });

  it.each([
    ['', 'not_xml'],
    ['not xml at all', 'not_xml'],
    ['<sbml', 'not_xml'],
    ['{"species": []}', 'not_xml'],
    ['<html/>', 'not_sbml'],
    ['<sbml/>', 'unknown_namespace'],
    ['<sbml xmlns="http://www.sbml.org/sbml/level1" level="1" version="2"/>', 'old_level'],
    ['<sbml xmlns="http://www.sbml.org/sbml/level4" level="4" version="1"/>', 'unknown_namespace'],
    ['<sbml xmlns="http://www.sbml.org/sbml/level3/version2/core" level="3" version="1"/>', 'version_mismatch'],
    ['<sbml xmlns="http://www.sbml.org/sbml/level3/version2/core" level="3" version="2"/>', 'missing_model'],
  ])('refuses “%s” as %s', (text, code) => {
    expect(codes(text)).toEqual([code]);
  });

  it('refuses a file cut short anywhere, without throwing', () => {
    const text = level3(
      compartments() + amounts('A') + parameters(['k', 1]) + reaction([['A', 1]], [], times('k', 'A')),
    );
    expect(codes(text)).toEqual([]);
    for (let length = 0; length < text.length; length += 7) expect(codes(text.slice(0, length))).toEqual(['not_xml']);
  });
});
