/**
 * Writes the job as SED-ML Level 1 Version 4, so that other programs can repeat its kind of simulation on model.xml.
 *
 * SED-ML describes one run; the replicates are a repeated task that resets the model. Method, seed and number of runs are terms of
 * KiSAO. Other programs use other streams of random numbers: they reach the same distributions, not the same replicates.
 * Source: SED-ML L1V4 specification, sections 2.2 (order of children) and 2.2.6 to 2.2.10; KiSAO identifiers as published.
 */

export interface SedmlJob {
  /** Location of the model beside the description. */
  modelFile: string;
  method: 'direct' | 'composition-rejection' | 'tau-leaping';
  /** u64 as a decimal string. */
  seed: string;
  horizon: number;
  gridIntervals: number;
  replicates: number;
  /** Only with tau-leaping. */
  epsilon?: number | undefined;
  /** Ids of parameters and species that the job ran with other values than the model's. */
  overrides: { parameters: Record<string, number>; initialCounts: Record<string, number> };
  /** Ids as in the model file, with the names to report. */
  species: { id: string; name: string }[];
}

export const kisao = {
  direct: 'KISAO:0000029',
  'composition-rejection': 'KISAO:0000610',
  'tau-leaping': 'KISAO:0000039',
  seed: 'KISAO:0000488',
  runs: 'KISAO:0000498',
  epsilon: 'KISAO:0000228',
} as const;

const namespace = 'http://sed-ml.org/sed-ml/level1/version4';
const sbml = 'http://www.sbml.org/sbml/level3/version2/core';
const time = 'urn:sedml:symbol:time';

const replacements: Record<string, string> = { '&': '&amp;', '<': '&lt;', '>': '&gt;', '"': '&quot;' };
const quoted = (value: string | number): string => `"${String(value).replaceAll(/[&<>"]/g, (c) => replacements[c]!)}"`;

export function writeSedml(job: SedmlJob): string {
  const variables = [{ id: 'time', name: 'time' }, ...job.species];
  const parameter = (term: string, value: string | number) =>
    `          <algorithmParameter kisaoID=${quoted(term)} value=${quoted(value)}/>`;
  return [
    '<?xml version="1.0" encoding="UTF-8"?>',
    `<sedML xmlns="${namespace}" xmlns:sbml="${sbml}" level="1" version="4">`,
    '  <listOfSimulations>',
    `    <uniformTimeCourse id="simulation" initialTime="0" outputStartTime="0" outputEndTime=${quoted(job.horizon)} numberOfSteps=${quoted(job.gridIntervals)}>`,
    `      <algorithm kisaoID=${quoted(kisao[job.method])}>`,
    '        <listOfAlgorithmParameters>',
    parameter(kisao.seed, job.seed),
    parameter(kisao.runs, 1),
    ...(job.epsilon === undefined ? [] : [parameter(kisao.epsilon, job.epsilon)]),
    '        </listOfAlgorithmParameters>',
    '      </algorithm>',
    '    </uniformTimeCourse>',
    '  </listOfSimulations>',
    '  <listOfModels>',
    ...modelLines(job),
    '  </listOfModels>',
    '  <listOfTasks>',
    '    <task id="replicate" modelReference="model" simulationReference="simulation"/>',
    '    <repeatedTask id="ensemble" range="replicates" resetModel="true">',
    '      <listOfRanges>',
    `        <uniformRange id="replicates" start="0" end=${quoted(Math.max(0, job.replicates - 1))} numberOfSteps=${quoted(Math.max(0, job.replicates - 1))} type="linear"/>`,
    '      </listOfRanges>',
    '      <listOfSubTasks>',
    '        <subTask order="1" task="replicate"/>',
    '      </listOfSubTasks>',
    '    </repeatedTask>',
    '  </listOfTasks>',
    '  <listOfDataGenerators>',
    ...variables.flatMap(({ id, name }, i) => [
      `    <dataGenerator id="values_${i}" name=${quoted(name)}>`,
      '      <listOfVariables>',
      i === 0
        ? `        <variable id="variable_0" symbol="${time}" taskReference="ensemble" modelReference="model"/>`
        : `        <variable id="variable_${i}" target=${quoted(target('species', id))} taskReference="ensemble" modelReference="model"/>`,
      '      </listOfVariables>',
      `      <math xmlns="http://www.w3.org/1998/Math/MathML"><ci> variable_${i} </ci></math>`,
      '    </dataGenerator>',
    ]),
    '  </listOfDataGenerators>',
    '  <listOfOutputs>',
    '    <report id="traces" name="Counts over time, replicate by replicate">',
    '      <listOfDataSets>',
    ...variables.map(
      ({ name }, i) => `        <dataSet id="column_${i}" label=${quoted(name)} dataReference="values_${i}"/>`,
    ),
    '      </listOfDataSets>',
    '    </report>',
    '  </listOfOutputs>',
    '</sedML>',
    '',
  ].join('\n');
}

const lists = { species: 'listOfSpecies/sbml:species', parameter: 'listOfParameters/sbml:parameter' };

const target = (kind: keyof typeof lists, id: string): string =>
  `/sbml:sbml/sbml:model/sbml:${lists[kind]}[@id='${id}']`;

function modelLines({ modelFile, overrides }: SedmlJob): string[] {
  const changes = [
    ...Object.entries(overrides.parameters).map(([id, value]) => [`${target('parameter', id)}/@value`, value] as const),
    ...Object.entries(overrides.initialCounts).map(
      ([id, value]) => [`${target('species', id)}/@initialAmount`, value] as const,
    ),
  ];
  const opening = `    <model id="model" language="urn:sedml:language:sbml.level-3.version-2" source=${quoted(modelFile)}`;
  if (changes.length === 0) return [`${opening}/>`];
  return [
    `${opening}>`,
    '      <listOfChanges>',
    ...changes.map(([path, value]) => `        <changeAttribute target=${quoted(path)} newValue=${quoted(value)}/>`),
    '      </listOfChanges>',
    '    </model>',
  ];
}
