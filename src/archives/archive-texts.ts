/** The words and the JSON of an archive: README for a person, job.json to repeat the job. */
import type { ArchiveSubject, Results } from './subject.ts';

export const caution =
  'Simulation results depend on the model and its parameters. They are decision support, not evidence of safety or efficacy. ' +
  'They must not be used alone for dosing, clinical, environmental-release or process-safety decisions, which follow the ' +
  'local codes and the judgement of qualified, licensed practitioners.';

/** Lines of at most 110 characters, broken between words. */
const wrap = (text: string): string => text.replaceAll(/(.{1,110})(?: |$)/g, '$1\n').trimEnd();

const json = (value: unknown): string => `${JSON.stringify(value, null, 2)}\n`;

/** All that is needed to repeat the job, and the digest that a repetition must reach. No times, no ids of ours. */
export function jobJson({ job, model, version }: ArchiveSubject, { ensemble }: Results, resultsDigest: string): string {
  const { inputs, ending } = job;
  return json({
    format: 'burette-job-1',
    model: { name: model.name, version: version.number, contentHash: version.contentHash, file: 'model.json' },
    method: inputs.method,
    kernel: ensemble.kernel,
    engineVersion: ensemble.engineVersion,
    seed: job.seed,
    horizon: inputs.horizon,
    gridIntervals: inputs.gridIntervals,
    overrides: inputs.overrides,
    keptTraces: inputs.keptTraces,
    eventBudgetPerReplicate: inputs.eventBudgetPerReplicate,
    points: 1,
    replicates: ensemble.replicates,
    replicatesAskedFor: job.replicatesPlanned,
    events: job.events,
    ended: { state: ending?.state, reason: ending?.reason, failure: ending?.failure ?? null },
    resultsDigest,
    resultsDigestOf: 'SHA-256 of the lines "<sha256>  <path>\\n" of the files under results/, sorted by path',
  });
}

const endings: Partial<Record<string, string>> = {
  done: 'All replicates asked for are complete.',
  stopped_at_cap: 'The job stopped at its cap: the replicates are the longest prefix that the cap could pay for.',
  cancelled: 'The job was cancelled: the replicates are the prefix that was complete then.',
};

export function readmeText({ job, model, version }: ArchiveSubject, { ensemble }: Results, paths: string[]): string {
  const { inputs, ending } = job;
  const unit = version.document.timeUnit ? ` ${version.document.timeUnit}` : '';
  const overridden = [
    ...Object.entries(inputs.overrides.parameters ?? {}),
    ...Object.entries(inputs.overrides.initialCounts ?? {}),
  ].map(([id, value]) => `${id} = ${value}`);
  const about: Record<string, string> = {
    'job.json': 'everything needed to repeat the job',
    'provenance.json': 'when, where and in which pieces it was computed',
    'model.xml': 'the model as SBML Level 3 Version 2',
    'model.json': 'the model as it was stored, byte for byte what the content hash is of',
    'results/summary.csv': 'mean and standard deviation at each grid time, each with its standard error',
    'results/quantiles.csv': 'quantiles (type 1, the inverse of the sample distribution)',
    'results/histograms.csv': 'how many replicates had each value; width 1 means exactly this value',
    'results/events.csv': 'reaction events of each replicate: what was metered',
    'results/blocks.csv': 'digests of blocks of replicates, for whoever re-runs some of them',
    'results/block-sums.csv': 'exact sums of each block: together they give every number of summary.csv',
    'results/traces.csv': 'the first replicates, whole, on the grid',
  };
  const rows = [
    ['Model', `${model.name}, version ${version.number} (${version.contentHash})`],
    ['Method', 'exact (each replicate is a sample path of the stochastic process itself)'],
    ['Kernel', `${ensemble.kernel}, ${ensemble.engineVersion}`],
    ['Horizon', `${inputs.horizon}${unit}, ${inputs.gridIntervals} grid intervals`],
    ['Seed', job.seed],
    ['Overrides', overridden.length > 0 ? overridden.join(', ') : 'none'],
    ['Replicates', `${ensemble.replicates} of ${job.replicatesPlanned}`],
    ['Events', String(job.events)],
  ];
  return [
    job.name,
    '='.repeat([...job.name].length),
    '',
    'An ensemble of exact stochastic simulations, computed and metered by Burette.',
    '',
    ...rows.map(([name, value]) => `${name!.padEnd(12)}${value}`),
    '',
    (ending && endings[ending.state]) ?? ending?.detail ?? '',
    '',
    'Files',
    '-----',
    ...paths.flatMap((path) => (about[path] ? [`${path.padEnd(26)}${about[path]}`] : [])),
    `${'SHA256SUMS'.padEnd(26)}checksums of all files: check with "sha256sum -c SHA256SUMS"`,
    '',
    'The archive is also a COMBINE archive (OMEX); manifest.xml lists its parts.',
    'In CSV files the time is in the model’s unit, "point" is the sweep point (0 without a sweep), and an empty field is a',
    'number that so few replicates cannot give. The same job gives the same bytes under results/ on any machine.',
    '',
    'Caution',
    '-------',
    wrap(caution),
    '',
  ].join('\n');
}
