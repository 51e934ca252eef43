/** The words of an archive: its README, and the facts that README and report have in common. */
import type { JobInputs } from '@/domain/jobs/job-inputs.ts';
import { targetName } from '@/domain/jobs/sweep.ts';
import type { ArchiveSubject, Results } from './subject.ts';

export const caution =
  'Simulation results depend on the model and its parameters. They are decision support, not evidence of safety or efficacy. ' +
  'They must not be used alone for dosing, clinical, environmental-release or process-safety decisions, which follow the ' +
  'local codes and the judgement of qualified, licensed practitioners.';

/** Lines of at most 110 characters, broken between words. */
const wrap = (text: string): string => text.replaceAll(/(.{1,110})(?: |$)/g, '$1\n').trimEnd();

const endings: Partial<Record<string, string>> = {
  done: 'All replicates asked for are complete.',
  stopped_at_cap: 'The job stopped at its cap: the replicates are the longest prefix that the cap could pay for.',
  cancelled: 'The job was cancelled: the replicates are the prefix that was complete then.',
};

const about: [pattern: RegExp, words: string][] = [
  [/^job\.json$/, 'everything needed to repeat the job'],
  [/^provenance\.json$/, 'when, where and in which pieces it was computed'],
  [/^report\.pdf$/, 'facts, final numbers and figures, to print or to pass on'],
  [/^model\.xml$/, 'the model as SBML Level 3 Version 2'],
  [/^model\.json$/, 'the model as it was stored, byte for byte what the content hash is of'],
  [/^simulation\.sedml$/, 'the job as SED-ML Level 1 Version 4, for other programs'],
  [/^results\/points\.csv$/, 'what each point of the sweep sets'],
  [/^results\/summary\.csv$/, 'mean and standard deviation at each grid time, each with its standard error'],
  [/^results\/quantiles\.csv$/, 'quantiles (type 1, the inverse of the sample distribution)'],
  [/^results\/histograms\.csv$/, 'how many replicates had each value; width 1 means exactly this value'],
  [/^results\/events\.csv$/, 'events of each replicate: what was metered'],
  [/^results\/blocks\.csv$/, 'digests of blocks of replicates, for whoever runs some of them again'],
  [/^results\/block-sums\.csv$/, 'exact sums of each block: together they give every number of summary.csv'],
  [/^results\/traces\.csv$/, 'the first replicates, whole, on the grid'],
  [/^results\/traces\.parquet$/, 'the same for pandas (read_parquet) and R (arrow::read_parquet)'],
];

/** What the job was, as pairs of label and value. */
export function describeJob({ job, model, version }: ArchiveSubject, { ensemble }: Results): [string, string][] {
  const { inputs, ending } = job;
  const unit = version.document.timeUnit ? ` ${version.document.timeUnit}` : '';
  const overridden = [
    ...Object.entries(inputs.overrides.parameters ?? {}),
    ...Object.entries(inputs.overrides.initialCounts ?? {}),
    ...Object.entries(inputs.overrides.changeTimes ?? {}).map(([id, value]) => [`time of ${id}`, value] as const),
  ].map(([id, value]) => `${id} = ${value}`);
  const { sweep } = inputs;
  return [
    ['Model', `${model.name}, version ${version.number} (${version.contentHash})`],
    ['Method', methodText(inputs)],
    ['Kernel', `${ensemble.kernel}, ${ensemble.engineVersion}`],
    ['Horizon', `${inputs.horizon}${unit}, ${inputs.gridIntervals} grid intervals`],
    ['Seed', job.seed],
    ['Overrides', overridden.length > 0 ? overridden.join(', ') : 'none'],
    ...(sweep
      ? [['Sweep', `${sweep.values.length} points of ${sweep.targets.map(targetName).join(', ')}`] as [string, string]]
      : []),
    ['Replicates', `${ensemble.replicates} of ${job.replicatesPlanned}${sweep ? ' at each point' : ''}`],
    ['Events', String(job.events)],
    ['Ended', (ending && endings[ending.state]) ?? ending?.detail ?? ''],
  ];
}

const methodText = ({ method, epsilon }: JobInputs): string =>
  method === 'exact'
    ? 'exact (each replicate is a sample path of the stochastic process itself)'
    : `approximate: tau-leaping, ε = ${epsilon}`;

/** What every reader of a leaped job's numbers must know; empty for the exact method. */
export const approximationText = ({ method, epsilon }: JobInputs): string =>
  method === 'exact'
    ? ''
    : 'These results are approximate. Tau-leaping lets many firings happen in one step, chosen so that propensities change by ' +
      `about ε = ${epsilon} of themselves at most. Its error comes on top of the sampling errors that are given, and no interval here ` +
      'contains it. First passages are resolved to the end of a step. Events are the Poisson numbers drawn, rejected steps ' +
      'included, and the exact firings.';

export function readmeText(subject: ArchiveSubject, results: Results, paths: string[]): string {
  const { job } = subject;
  const facts = describeJob(subject, results).filter(([label]) => label !== 'Ended');
  return [
    job.name,
    '='.repeat([...job.name].length),
    '',
    `An ensemble of ${job.inputs.method === 'exact' ? 'exact' : 'approximate'} stochastic simulations, computed and metered by Burette.`,
    '',
    ...facts.map(([label, value]) => `${label.padEnd(12)}${value}`),
    '',
    (job.ending && endings[job.ending.state]) ?? job.ending?.detail ?? '',
    '',
    ...(job.inputs.method === 'exact' ? [] : [wrap(approximationText(job.inputs)), '']),
    'Files',
    '-----',
    ...paths.flatMap((path) =>
      about.filter(([pattern]) => pattern.test(path)).map(([, words]) => `${path.padEnd(26)}${words}`),
    ),
    ...(paths.some((path) => path.startsWith('figures/'))
      ? [`${'figures/'.padEnd(26)}time course, distribution at the end and traces of each observable, as SVG`]
      : []),
    `${'SHA256SUMS'.padEnd(26)}checksums of all files: check with "sha256sum -c SHA256SUMS"`,
    '',
    'The archive is also a COMBINE archive (OMEX); manifest.xml lists its parts.',
    'In CSV files the time is in the model’s unit, "point" is the sweep point (0 without a sweep), and an empty field is a',
    'number that so few replicates cannot give.',
    ...(job.inputs.sweep
      ? ['Figures, report and simulation.sedml are of point 0; results/points.csv and job.json list all points.']
      : []),
    '',
    'What can be checked',
    '-------------------',
    wrap(
      'The same job gives the same bytes under results/ on any machine. job.json has the digest of the results: the SHA-256 of ' +
        'the lines "<sha256>  <path>" of all files under results/, sorted by path, each line ended by a line feed, as in SHA256SUMS. ' +
        'The other files may differ between two runs: they hold dates, or drawings made by libraries.',
    ),
    '',
    wrap(
      'results/block-sums.csv holds, for each block of replicates, the exact sums of the first four powers of every observable at ' +
        'every grid time: a whole number, or "m p-e" without the space for m · 2^-e. Added over the blocks they give every mean, ' +
        'standard deviation and error of summary.csv. Whoever has the model runs a block again and reaches its digest in ' +
        'results/blocks.csv. "npm run verify -- archive.zip" does both.',
    ),
    '',
    'Caution',
    '-------',
    wrap(caution),
    '',
  ].join('\n');
}
