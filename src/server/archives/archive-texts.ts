/** The words and the JSON of an archive: README for a person, job.json to repeat the job, provenance.json for its history. */
import { arch, cpus, platform } from 'node:os';
import type { Batch, Job, Segment } from '@db/models/jobs.ts';
import type { ModelVersion, NetworkModel } from '@db/models/models.ts';
import type { PrefixEnsemble } from '../jobs/prefix-ensemble.ts';

export const caution =
  'Simulation results depend on the model and its parameters. They are decision support, not evidence of safety or efficacy. ' +
  'They must not be used alone for dosing, clinical, environmental-release or process-safety decisions, which follow the ' +
  'local codes and the judgement of qualified, licensed practitioners.';

/** Lines of at most 110 characters, broken between words. */
const wrap = (text: string): string => text.replaceAll(/(.{1,110})(?: |$)/g, '$1\n').trimEnd();

const json = (value: unknown): string => `${JSON.stringify(value, null, 2)}\n`;

export interface ArchiveSubject {
  job: Job;
  model: NetworkModel;
  version: ModelVersion;
  ensemble: PrefixEnsemble;
  revision: number;
}

/** All that is needed to repeat the job, and the digest that a repetition must reach. No times, no ids of ours. */
export function jobJson({ job, model, version, ensemble }: ArchiveSubject, resultsDigest: string): string {
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

/** When, where and in which pieces it was computed: none of it shapes a number under results/. */
export function provenanceJson(
  { job, version, revision }: ArchiveSubject,
  segments: Segment[],
  batches: Batch[],
  writtenAt: string,
): string {
  return json({
    format: 'burette-provenance-1',
    jobId: job.id,
    modelVersionId: version.id,
    revision,
    launchedAt: job.createdAt,
    startedAt: job.startedAt,
    archiveWrittenAt: writtenAt,
    chargedMicrocredits: job.chargedMicrocredits,
    capMicrocredits: job.capMicrocredits,
    segments: segments.map((segment) => ({
      quoteId: segment.quoteId,
      priceBookId: segment.priceBookId,
      microcreditsPerMillionEvents: segment.microcreditsPerMillionEvents,
      firstReplicate: segment.firstReplicate,
      replicates: segment.replicateCount,
      events: segment.events,
      chargedMicrocredits: segment.chargedMicrocredits,
    })),
    batches: batches.map((batch) => ({
      firstReplicate: batch.firstReplicate,
      replicatesPlanned: batch.replicateCount,
      replicatesDelivered: batch.state === 'joined' ? batch.completeReplicates : 0,
      events: batch.state === 'joined' ? batch.events : 0,
      absorbedEvents: batch.absorbedEvents,
      workerSeconds: batch.seconds,
    })),
    machine: {
      platform: platform(),
      architecture: arch(),
      processor: cpus()[0]?.model ?? null,
      node: process.version,
    },
  });
}

const endings: Partial<Record<string, string>> = {
  done: 'All replicates asked for are complete.',
  stopped_at_cap: 'The job stopped at its cap: the replicates are the longest prefix that the cap could pay for.',
  cancelled: 'The job was cancelled: the replicates are the prefix that was complete then.',
};

export function readmeText({ job, model, version, ensemble }: ArchiveSubject, paths: string[]): string {
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
