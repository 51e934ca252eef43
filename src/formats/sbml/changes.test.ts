/** Events of SBML as timed and triggered changes; expectations by hand from SBML Level 3 Version 2 core, section 4.12 (from memory). */
import { describe, expect, it } from 'vitest';
import { batchTask } from '@tests/factories/batch-tasks.ts';
import { checkSbml } from '@tests/support/sbml-checker.ts';
import type { NetworkDocument } from '@/domain/network/document.ts';
import { normaliseDocument } from '@/domain/network/normalise-document.ts';
import { resolveNetwork } from '@/domain/network/resolve-network.ts';
import { gridTimes } from '@/engine/exact/direct-method.ts';
import { runBatch } from '@/engine/run-batch.ts';
import { statisticsOf } from '@/engine/statistics/statistics-of.ts';
import { readSbml } from './read-sbml.ts';
import { writeSbml } from './write-sbml.ts';

const math = (content: string): string => `<math xmlns="http://www.w3.org/1998/Math/MathML">${content}</math>`;
const time = '<csymbol encoding="text" definitionURL="http://www.sbml.org/sbml/symbols/time">t</csymbol>';
const after = (moment: string): string => `<apply><geq/>${time}${moment}</apply>`;
const low = '<apply><lt/><ci>A</ci><cn>3</cn></apply>';
const plusTen = '<apply><plus/><ci>A</ci><cn>10</cn></apply>';

interface EventParts {
  id?: string;
  trigger?: string;
  before?: boolean;
  persistent?: boolean;
  variable?: string;
  value?: string;
  more?: string;
}
const event = ({
  id = 'dose',
  trigger = after('<cn>5</cn>'),
  before = false,
  persistent = true,
  variable = 'A',
  value = plusTen,
  more = '',
}: EventParts): string =>
  `<event ${id === '' ? '' : `id="${id}"`} useValuesFromTriggerTime="true"><trigger initialValue="${before}" persistent="${persistent}">${math(trigger)}</trigger>${more}` +
  `<listOfEventAssignments><eventAssignment variable="${variable}">${math(value)}</eventAssignment></listOfEventAssignments></event>`;

const model = (...events: string[]): string =>
  '<sbml xmlns="http://www.sbml.org/sbml/level3/version2/core" level="3" version="2"><model id="m">' +
  '<listOfCompartments><compartment id="V" size="2" constant="true"/></listOfCompartments><listOfSpecies>' +
  '<species id="A" compartment="V" initialAmount="8" hasOnlySubstanceUnits="true" boundaryCondition="false" constant="false"/>' +
  '<species id="B" compartment="V" initialAmount="8" hasOnlySubstanceUnits="false" boundaryCondition="false" constant="false"/></listOfSpecies>' +
  '<listOfParameters><parameter id="k" value="1" constant="false"/><parameter id="fixed" value="4" constant="true"/></listOfParameters>' +
  '<listOfReactions><reaction id="r" reversible="false"><listOfReactants><speciesReference species="A" stoichiometry="1" constant="true"/></listOfReactants>' +
  `<kineticLaw>${math('<apply><times/><ci>k</ci><ci>A</ci></apply>')}</kineticLaw></reaction></listOfReactions>` +
  `<listOfEvents>${events.join('')}</listOfEvents></model></sbml>`;

const read = (...events: string[]) => {
  const outcome = readSbml(model(...events));
  if (!outcome.ok) throw new Error(JSON.stringify(outcome.problems));
  return outcome;
};
const changes = (...events: string[]) => read(...events).document.changes;
const codes = (...events: string[]): string[] => {
  const outcome = readSbml(model(...events));
  return (outcome.ok ? outcome.notes : outcome.problems)
    .map(({ code }) => code)
    .filter((code) => code !== 'read_as_mass_action');
};

describe('readSbml with changes', () => {
  it('reads time ≥ t, t ≤ time and their strict forms as timed changes', () => {
    const expected = [
      { id: 'dose', when: { kind: 'time', time: 'fixed' }, assignments: [{ variable: 'A', expression: 'A + 10' }] },
    ];
    const limit = '<ci>fixed</ci>';
    for (const trigger of [
      after(limit),
      `<apply><gt/>${time}${limit}</apply>`,
      `<apply><leq/>${limit}${time}</apply>`,
      `<apply><lt/>${limit}${time}</apply>`,
    ]) {
      expect(changes(event({ trigger }))).toEqual(expected);
    }
  });

  it('reads a trigger on the state as a condition, happening at the start when initialValue is false', () => {
    expect(changes(event({ trigger: low, before: false }))![0]!.when).toEqual({
      kind: 'condition',
      condition: 'A < 3',
      happensAtStart: true,
    });
    expect(changes(event({ trigger: low, before: true }))![0]!.when).toEqual({
      kind: 'condition',
      condition: 'A < 3',
      happensAtStart: false,
    });
  });

  it('lets an event at time 0 happen at 0 when initialValue is false, and never when it is true', () => {
    expect(changes(event({ trigger: after('<cn>0</cn>') }))![0]!.when).toEqual({ kind: 'time', time: '0' });
    expect(changes(event({ trigger: after('<cn>-3</cn>') }))![0]!.when).toEqual({ kind: 'time', time: '0' });
    expect(changes(event({ trigger: after('<cn>0</cn>'), before: true }))).toBeUndefined();
    expect(codes(event({ trigger: after('<cn>0</cn>'), before: true }))).toEqual(['never_happens']);
  });

  it('sets a species in what its id means: 3 per unit of volume in 2 are 6 molecules', () => {
    const outcome = resolveNetwork(read(event({ variable: 'B', value: '<cn>3</cn>' })).document);
    expect(outcome.ok && outcome.network.changes![0]!.sets).toEqual([
      {
        target: { kind: 'species', index: 1 },
        expression: {
          kind: 'binary',
          operator: 'multiply',
          left: { kind: 'number', value: 3 },
          right: { kind: 'parameter', index: 2 },
        },
      },
    ]);
  });

  it('puts events of higher priority first, those without one last, and names events without an id', () => {
    const priority = (value: number) => `<priority>${math(`<cn>${value}</cn>`)}</priority>`;
    const three = [
      event({ id: 'last' }),
      event({ id: 'low', more: priority(1) }),
      event({ id: '', more: priority(7) }),
    ];
    expect(changes(...three)!.map(({ id }) => id)).toEqual(['change', 'low', 'last']);
  });

  const refusals: [string, string, string][] = [
    ['a delay', event({ more: `<delay>${math('<cn>1</cn>')}</delay>` }), 'event_delay'],
    ['a priority that varies', event({ more: `<priority>${math('<ci>A</ci>')}</priority>` }), 'event_priority'],
    ['time compared with a count', event({ trigger: after('<ci>A</ci>') }), 'time_in_trigger'],
    ['time and state mixed', event({ trigger: `<apply><and/>${after('<cn>1</cn>')}${low}</apply>` }), 'symbol_time'],
    ['a constant parameter set', event({ variable: 'fixed' }), 'constant_set'],
    ['a compartment set', event({ variable: 'V' }), 'variable_compartment'],
    ['a reaction set', event({ variable: 'r' }), 'unknown_name'],
    ['an unknown name in a value', event({ value: '<ci>Q</ci>' }), 'unknown_name'],
    ['nothing set', event({}).replace(/<listOfEventAssignments>.*<\/listOfEventAssignments>/, ''), 'empty_change'],
    ['no trigger', event({}).replace(/<trigger.*<\/trigger>/, ''), 'missing_trigger'],
  ];
  it.each(refusals)('refuses %s by name', (_, text, code) => {
    expect(codes(text)).toEqual([code]);
  });

  it('warns where events of one moment could differ from the standard', () => {
    expect(codes(event({ id: 'one' }), event({ id: 'two', persistent: false }))).toEqual([
      'values_at_one_moment',
      'values_at_one_moment',
      'trigger_not_persistent',
    ]);
  });
});

describe('readSbml with laws that compare the time', () => {
  const lawful = (law: string): string =>
    model(event({ id: 'switch_after_fixed' })).replace('<apply><times/><ci>k</ci><ci>A</ci></apply>', law);
  const piecewise = (condition: string): string =>
    `<apply><times/><ci>A</ci><piecewise><piece><cn>0</cn>${condition}</piece><otherwise><ci>fixed</ci></otherwise></piecewise></apply>`;
  const before = (moment: string): string => `<apply><lt/>${time}${moment}</apply>`;
  const documentOf = (law: string): NetworkDocument => {
    const outcome = readSbml(lawful(law));
    if (!outcome.ok) throw new Error(JSON.stringify(outcome.problems));
    return outcome.document;
  };
  const refusalsOf = (law: string): string[] => {
    const outcome = readSbml(lawful(law));
    return outcome.ok ? [] : outcome.problems.map(({ code }) => code);
  };

  it('turns the breakpoint into a timed change of a parameter, with an id that nothing else has', () => {
    const { reactions, parameters, changes: made } = documentOf(piecewise(before('<ci>fixed</ci>')));
    expect(reactions[0]!.rateLaw).toEqual({
      kind: 'massAction',
      constant: 'piecewise(0, after_fixed == 0, fixed)',
    });
    expect(parameters!.find(({ id }) => id === 'after_fixed')!.value).toBe(0);
    expect(made![0]).toEqual({
      id: 'switch_after_fixed_2',
      when: { kind: 'time', time: 'fixed' },
      assignments: [{ variable: 'after_fixed', expression: '1' }],
    });
  });

  it('runs as it is written: of 8 molecules none is lost before time 4, and nearly all soon after', async () => {
    const outcome = resolveNetwork({ ...documentOf(piecewise(before('<ci>fixed</ci>'))), observables: [] });
    if (!outcome.ok) throw new Error(JSON.stringify(outcome.problems));
    const changes = outcome.network.changes!.slice(0, 1);
    const task = batchTask({ ...outcome.network, changes }, { horizon: 8, gridIntervals: 2, replicateCount: 4_000 });
    const { observables } = statisticsOf((await runBatch(task)).summary, gridTimes(8, 2));
    expect(observables[0]!.mean.slice(0, 2)).toEqual([8, 8]);
    // 8 e^−16 = 9.0e-7 each on average: a molecule is left in one of 280 such tests; the seed is fixed.
    expect(observables[0]!.mean[2]).toBe(0);
  });

  it('says all four comparisons, either way round, by one switch', () => {
    const moment = '<cn>2.5</cn>';
    const conditions = ['lt', 'leq', 'gt', 'geq'].flatMap((name) => [
      `<apply><${name}/>${time}${moment}</apply>`,
      `<apply><${name}/>${moment}${time}</apply>`,
    ]);
    const laws = conditions.map((condition) => documentOf(piecewise(condition)));
    expect(
      laws.map(({ reactions }) => /after_2_5 == (.)/.exec(JSON.stringify(reactions[0]!.rateLaw))![1]).join(''),
    ).toBe('01011010');
    expect(laws.map((one) => one.changes!.length)).toEqual(Array(8).fill(2));
  });

  it('is on from the start where the moment is not after 0', () => {
    const { parameters, changes: made } = documentOf(piecewise(after('<cn>0</cn>')));
    expect(parameters!.find(({ id }) => id === 'after_0')!.value).toBe(1);
    expect(made!.map(({ id }) => id)).toEqual(['switch_after_fixed']);
  });

  const refused: [string, string][] = [
    ['a drift', `<apply><times/><ci>A</ci>${time}</apply>`],
    ['the time compared with a count', piecewise(before('<ci>A</ci>'))],
    ['the time compared with itself', piecewise(before(time))],
    ['the time equal to a number', piecewise(`<apply><eq/>${time}<cn>1</cn></apply>`)],
  ];
  it.each(refused)('refuses %s by name', (_, law) => {
    expect(refusalsOf(law)).toEqual(['symbol_time']);
  });
});

describe('writeSbml with changes', () => {
  const document: NetworkDocument = {
    timeUnit: 'h',
    species: [{ id: 'A', initialCount: 8 }],
    parameters: [
      { id: 'k', value: 1, unit: '1/h' },
      { id: 'first', value: 3, unit: 'h' },
      { id: 'apart', value: 12, unit: 'h' },
    ],
    reactions: [{ id: 'r', equation: 'A → ∅', rateLaw: { kind: 'massAction', constant: 'k' } }],
    changes: [
      {
        id: 'dose',
        name: 'Dose',
        when: { kind: 'time', time: 'first', every: 'apart', times: 3 },
        assignments: [{ variable: 'A', expression: 'A + 10' }],
      },
      {
        id: 'slow',
        when: { kind: 'condition', condition: 'A < 3 or A > 20', happensAtStart: true },
        assignments: [{ variable: 'k', expression: 'k / 2' }],
      },
      {
        id: 'reset',
        when: { kind: 'time', time: '0.1' },
        assignments: [
          { variable: 'A', expression: '0' },
          { variable: 'k', expression: '1' },
        ],
      },
    ],
  };
  const text = writeSbml(document, { modelId: 'm', name: 'm' });
  const reread = readSbml(text);
  if (!reread.ok) throw new Error(JSON.stringify(reread.problems));

  it('keeps single changes word for word and their order', () => {
    const [, slow, reset] = normaliseDocument(document).changes!;
    expect(reread.document.changes!.slice(3)).toEqual([slow, reset]);
  });

  it('writes a repeated change out, at the same times', () => {
    const outcome = resolveNetwork(reread.document);
    const times =
      outcome.ok &&
      outcome.network.changes!.slice(0, 3).map(({ id, when }) => [id, when.kind === 'times' && when.times]);
    expect(times).toEqual([
      ['dose', [3]],
      ['dose_2', [15]],
      ['dose_3', [27]],
    ]);
  });

  it.runIf(checkSbml !== null)('passes the standard’s own checker without an error', () => {
    const [findings] = checkSbml!([text]);
    expect(findings!.filter(({ severity }) => severity !== 'Warning')).toEqual([]);
  });
});
