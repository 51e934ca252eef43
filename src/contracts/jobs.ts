/** Quotes, jobs, progress, statistics. */
import { z } from 'zod';
import { jobStates } from '@/domain/jobs/job-state.ts';
import { limits } from '@/domain/limits.ts';
import { lanes } from '@/domain/pricing/price-book.ts';
import { contract } from './contract.ts';
import { problem } from './network.ts';

const id = z.string().min(1).max(100);
const microcredits = z.number().int();
const count = z.number().int().min(0);

/** u64 as a decimal string; a request may also give a small number. */
const seed = z.union([
  z
    .string()
    .regex(/^\d{1,20}$/, 'A seed is a whole number from 0 to 2^64 − 1, written in digits.')
    .refine((text) => BigInt(text) < 2n ** 64n, 'A seed is below 2^64.'),
  z.number().int().min(0),
]);

const overrides = z.strictObject({
  parameters: z.record(z.string().max(limits.identifierCharacters * 2 + 1), z.number()).optional(),
  initialCounts: z.record(z.string().max(limits.identifierCharacters), z.number()).optional(),
  /** When timed changes first happen. */
  changeTimes: z.record(z.string().max(limits.identifierCharacters), z.number()).optional(),
});

const sweepTarget = z.strictObject({
  kind: z.enum(['parameter', 'initial_count', 'change_time']),
  id: z
    .string()
    .min(1)
    .max(limits.identifierCharacters * 2 + 1),
});
const scale = z.enum(['linear', 'log']);
const pointCount = z.number().int().min(1).max(limits.sweepPoints);
const axesMost = 10;

/** Every combination of axes; points one by one; or a Latin hypercube, whose points follow from its seed (0 when left out). */
const sweepRequest = z.union([
  z.strictObject({
    kind: z.literal('grid'),
    axes: z
      .array(
        z.union([
          z.strictObject({ target: sweepTarget, values: z.array(z.number()).min(1).max(limits.sweepPoints) }),
          z.strictObject({
            target: sweepTarget,
            spacing: z.strictObject({ from: z.number(), to: z.number(), count: pointCount.min(2), scale }),
          }),
        ]),
      )
      .min(1)
      .max(axesMost),
  }),
  z.strictObject({
    kind: z.literal('list'),
    targets: z.array(sweepTarget).min(1).max(axesMost),
    values: z.array(z.array(z.number()).max(axesMost)).min(1).max(limits.sweepPoints),
  }),
  z.strictObject({
    kind: z.literal('latin_hypercube'),
    axes: z
      .array(z.strictObject({ target: sweepTarget, from: z.number(), to: z.number(), scale }))
      .min(1)
      .max(axesMost),
    count: pointCount,
    seed: seed.optional(),
  }),
]);

/** The points as a job pins them: values[point][target]. */
export const sweepDocument = z.object({
  kind: z.enum(['grid', 'list', 'latin_hypercube']),
  targets: z.array(sweepTarget),
  values: z.array(z.array(z.number())),
});

/** When an observable first rises to (is at least) or falls to (is at most) a threshold; extinction is `fallsTo: 0`. */
const passageRequest = z.union([
  z.strictObject({ observable: z.string().max(limits.identifierCharacters), risesTo: z.number() }),
  z.strictObject({ observable: z.string().max(limits.identifierCharacters), fallsTo: z.number() }),
]);

const precision = {
  kind: z.literal('precision'),
  observable: z.string().max(limits.identifierCharacters),
  /** A grid time. */
  time: z.number().min(0),
};
/** Half the width of the mean's 95 % interval: as a part of the mean, or in its own unit. */
const relative = z.number().positive().max(1);
const absolute = z.number().positive();

/** "precision": at most `replicates`, fewer once the mean is known that well; looked at after 256, 512, 1024 … of them. */
const stoppingRequest = z.union([
  z.strictObject({ kind: z.literal('replicates') }),
  z.strictObject({ ...precision, relative }),
  z.strictObject({ ...precision, absolute }),
]);

export const quoteRequest = z.strictObject({
  modelVersionId: id,
  replicates: z.number().int().min(1, 'At least one replicate.').max(limits.replicatesPerJob),
  /** Simulated time, in the model's unit of time. */
  horizon: z.number().positive('A horizon is above 0.').max(1e250),
  gridIntervals: z.number().int().min(1).max(limits.gridIntervals),
  method: z.enum(['exact', 'leap']),
  /** Of "leap" only: by how much of itself a propensity may change in a leap; 0.03 when left out. */
  epsilon: z.number().positive().max(0.5).optional(),
  seed: seed.optional(),
  lane: z.enum(lanes),
  overrides: overrides.optional(),
  /** `replicates` are then those of each point. */
  sweep: sweepRequest.optional(),
  stopping: stoppingRequest.optional(),
  outputs: z
    .strictObject({
      keptTraces: z.number().int().min(0).max(limits.keptTraces).optional(),
      passages: z.array(passageRequest).max(limits.passagesPerJob).optional(),
      /** Observables, all whole counts, whose covariances and correlations are wanted: two or more. */
      correlations: z.array(id).min(2).max(limits.correlatedObservables).optional(),
    })
    .optional(),
});

const methodPilot = z.object({
  pilotReplicates: count,
  eventsPerReplicate: z.object({ mean: z.number(), sd: z.number() }),
  /** A pilot replicate was cut at the pilot's event budget: events and price are lower bounds. */
  oneSided: z.boolean(),
  microcreditsPerMillionEvents: z.number().int(),
  /** Expected price of the replicates asked for, by this method in this lane. */
  microcredits,
  /** Measured in the pilot, on a busy machine: good for "slower", not for more. */
  secondsPerReplicate: z.number(),
});

/** Exact and leaped pilots of the same inputs, side by side. */
export const methodComparison = z.object({
  /** Null where no exact pilot could run; `exactRefused` says why. */
  exact: methodPilot.nullable(),
  exactRefused: z.string().nullable(),
  leap: methodPilot,
  leapDearer: z.boolean().nullable(),
  leapSlower: z.boolean().nullable(),
  /** Means at the horizon, of a sweep's first point; the difference is leaped less exact, with its 95 % interval (Welch). */
  observables: z.array(
    z.object({
      id: z.string(),
      exactMean: z.number(),
      leapMean: z.number(),
      difference: z.number(),
      interval: z.object({ low: z.number(), high: z.number() }).nullable(),
    }),
  ),
});
export type MethodComparison = z.infer<typeof methodComparison>;

export const quoteDocument = z.object({
  id: z.string(),
  eventsPerReplicate: z.object({ mean: z.number(), sd: z.number() }),
  /** `high` is the default cap. */
  microcredits: z.object({ expected: microcredits, low: microcredits, high: microcredits }),
  /** True when a pilot replicate was cut at the pilot's event budget: `high` is then no upper bound. */
  oneSided: z.boolean(),
  /** The least cap with which this quote can be launched. */
  leastCapMicrocredits: microcredits,
  /** Seconds to finish at the present queue. */
  secondsByLane: z.object({ steady: z.number(), express: z.number(), overnight: z.number() }),
  archiveBytes: count,
  expiresAt: z.string(),
  pilot: z.object({ replicates: count, events: count, cutReplicates: count, cached: z.boolean() }),
  lane: z.enum(lanes),
  microcreditsPerMillionEvents: z.number().int(),
  priceBookVersion: z.number().int(),
  /** At each point. */
  replicates: count,
  method: z.enum(['exact', 'leap']),
  /** Of tau-leaping; null for the exact method. */
  epsilon: z.number().nullable(),
  /** Null for the exact method. */
  comparison: methodComparison.nullable(),
  points: count,
  /** Null without one. */
  sweep: sweepDocument.nullable(),
  seed: z.string(),
  kernel: z.string(),
  engineVersion: z.string(),
  usedByJobId: z.string().nullable(),
  problems: z.array(problem),
});
export type QuoteDocument = z.infer<typeof quoteDocument>;

export const modelFailure = z.object({
  kind: z.enum([
    'negative_propensity',
    'not_a_number',
    'count_overflow',
    'event_budget',
    'bad_assignment',
    'change_cascade',
  ]),
  replicate: count,
  /** Of a sweep. */
  point: count.optional(),
  reaction: z.string().nullable(),
  /** The timed or triggered change that could not be made. */
  change: z.string().optional(),
  time: z.number(),
  state: z.record(z.string(), z.number()),
});

export const stopReasons = [
  'replicates_reached',
  'precision_reached',
  'cap_reached',
  'cancelled',
  'negative_propensity',
  'not_a_number',
  'count_overflow',
  'event_budget',
  'bad_assignment',
  'change_cascade',
  'our_failure',
] as const;

export const passageDocument = z.object({
  observable: z.string(),
  direction: z.enum(['rises_to', 'falls_to']),
  threshold: z.number(),
});

export const jobDocument = z.object({
  id: z.string(),
  name: z.string(),
  state: z.enum(jobStates),
  /** While running: `computing`, then `finishing` (statistics and archive); null before and after. */
  phase: z.enum(['computing', 'finishing']).nullable(),
  model: z.object({ id: z.string(), name: z.string(), versionId: z.string(), versionNumber: z.number().int() }),
  launchedBy: z.object({ id: z.string(), name: z.string() }),
  projectCode: z.object({ id: z.string(), code: z.string() }).nullable(),
  lane: z.enum(lanes),
  method: z.enum(['exact', 'leap']),
  /** Of tau-leaping; null for the exact method. */
  epsilon: z.number().nullable(),
  horizon: z.number(),
  timeUnit: z.string().nullable(),
  gridIntervals: z.number().int(),
  observables: z.array(z.string()),
  overrides,
  keptTraces: count,
  passages: z.array(passageDocument),
  /** Null: stops at the planned replicates. */
  stopping: z.object({ ...precision, relative: relative.optional(), absolute: absolute.optional() }).nullable(),
  points: z.number().int(),
  /** Null without one. */
  sweep: sweepDocument.nullable(),
  replicatesPlanned: count,
  /** Always the complete prefix of replicates by index. */
  replicatesDone: count,
  events: count,
  expectedMicrocredits: microcredits,
  chargedMicrocredits: microcredits,
  heldMicrocredits: microcredits,
  capMicrocredits: microcredits,
  stopReason: z.enum(stopReasons).nullable(),
  /** A sentence for a person. */
  stopDetail: z.string().nullable(),
  failure: modelFailure.nullable(),
  precisionReached: z.boolean().nullable(),
  seed: z.string(),
  kernel: z.string().nullable(),
  engineVersion: z.string(),
  resultsDigest: z.string().nullable(),
  archive: z.object({ sha256: z.string(), bytes: count, revision: z.number().int() }).nullable(),
  /** Estimated at the present rate; null when nothing is left or nothing is known yet. */
  secondsLeft: z.number().nullable(),
  createdAt: z.string(),
  startedAt: z.string().nullable(),
  finishedAt: z.string().nullable(),
});
export type JobDocument = z.infer<typeof jobDocument>;

const oneJob = z.object({ job: jobDocument });
const jobPath = '/api/v1/teams/{team}/jobs';
const reading = ['not_signed_in', 'not_found', 'forbidden'] as const;
const launching = [...reading, 'team_suspended', 'invalid_input', 'unsupported_media_type'] as const;

export const createQuote = contract({
  id: 'createQuote',
  feature: 'jobs',
  method: 'POST',
  path: '/api/v1/teams/{team}/quotes',
  summary: 'Run a pilot and quote a job: cost with a 95 % range, time by lane, archive size',
  access: { kind: 'team', permission: 'jobs:launch' },
  body: quoteRequest,
  answers: [{ status: 201, description: 'The quote', schema: z.object({ quote: quoteDocument }) }],
  refusals: [...launching, 'invalid_network', 'pilot_failed', 'rate_limited', 'idempotency_key_reused', 'too_large'],
  idempotency: 'service',
});

export const readQuote = contract({
  id: 'readQuote',
  feature: 'jobs',
  method: 'GET',
  path: '/api/v1/teams/{team}/quotes/{quote}',
  summary: 'One quote, as it was given',
  access: { kind: 'team', permission: 'jobs:read' },
  answers: [{ status: 200, description: 'The quote', schema: z.object({ quote: quoteDocument }) }],
  refusals: [...reading],
});

export const launchJob = contract({
  id: 'launchJob',
  feature: 'jobs',
  method: 'POST',
  path: jobPath,
  summary: 'Launch a quoted job: holds the cap and queues the work',
  access: { kind: 'team', permission: 'jobs:launch' },
  body: z.strictObject({
    quoteId: id,
    name: z.string().trim().min(1).max(limits.nameCharacters),
    /** Default: the quote's `high`. */
    capMicrocredits: z.number().int().min(0).optional(),
    /** Id or code of one of the team's open project codes. */
    projectCode: z.string().min(1).max(100).optional(),
  }),
  answers: [{ status: 201, description: 'Queued', schema: oneJob }],
  refusals: [
    ...launching,
    'payment_owed',
    'quote_expired',
    'quote_used',
    'cap_too_low',
    'insufficient_credits',
    'too_many_jobs',
    'project_code_closed',
    'budget_exceeded',
    'idempotency_key_reused',
    'too_large',
  ],
  idempotency: 'transaction',
});

export const listJobs = contract({
  id: 'listJobs',
  feature: 'jobs',
  method: 'GET',
  path: jobPath,
  summary: 'Jobs of the team, newest first',
  access: { kind: 'team', permission: 'jobs:read' },
  query: z.object({
    limit: z.coerce.number().int().min(1).max(limits.listPage).optional(),
    cursor: z.string().max(100).optional(),
    /** One state, or several with commas. */
    state: z.string().max(100).optional(),
    model: id.optional(),
    member: id.optional(),
    /** Id or code. */
    projectCode: z.string().min(1).max(100).optional(),
  }),
  answers: [
    {
      status: 200,
      description: 'One page',
      schema: z.object({ jobs: z.array(jobDocument), nextCursor: z.string().nullable() }),
    },
  ],
  refusals: [...reading, 'invalid_input'],
});

export const readJob = contract({
  id: 'readJob',
  feature: 'jobs',
  method: 'GET',
  path: `${jobPath}/{job}`,
  summary: 'One job as it stands',
  access: { kind: 'team', permission: 'jobs:read' },
  answers: [{ status: 200, description: 'The job', schema: oneJob }],
  refusals: [...reading],
});

export const cancelJob = contract({
  id: 'cancelJob',
  feature: 'jobs',
  method: 'POST',
  path: `${jobPath}/{job}/cancel`,
  summary: 'Stop a job; the complete prefix of replicates is kept and charged, the rest of the hold comes back',
  access: { kind: 'team', permission: 'jobs:launch' },
  body: z.strictObject({}),
  answers: [{ status: 200, description: 'Stopping', schema: oneJob }],
  refusals: [...launching, 'job_not_running', 'idempotency_key_reused', 'too_large'],
  idempotency: 'transaction',
});

export const extendJob = contract({
  id: 'extendJob',
  feature: 'jobs',
  method: 'POST',
  path: `${jobPath}/{job}/extend`,
  summary: 'Add the replicates of a quote to a finished job: a charge segment of its own, a new archive revision',
  access: { kind: 'team', permission: 'jobs:launch' },
  body: z.strictObject({ quoteId: id, capMicrocredits: z.number().int().min(0).optional() }),
  answers: [{ status: 200, description: 'Queued again', schema: oneJob }],
  refusals: [
    ...launching,
    'payment_owed',
    'job_not_finished',
    'quote_expired',
    'quote_used',
    'cap_too_low',
    'insufficient_credits',
    'too_many_jobs',
    'budget_exceeded',
    'idempotency_key_reused',
    'too_large',
  ],
  idempotency: 'transaction',
});

export const jobProgress = contract({
  id: 'jobProgress',
  feature: 'jobs',
  method: 'GET',
  path: `${jobPath}/{job}/progress`,
  summary: 'Server-sent events named `job`, each with the document of GET job; the stream ends when the job does',
  access: { kind: 'team', permission: 'jobs:read' },
  answers: [{ status: 200, description: 'Events', contentType: 'text/event-stream' }],
  refusals: [...reading],
});

const point = z.coerce.number().int().min(0).default(0);
const numbers = z.array(z.number());

export const statisticsDocument = z.object({
  /** The complete prefix that these numbers concern. */
  replicates: count,
  times: numbers,
  observables: z.array(
    z.object({
      id: z.string(),
      mean: numbers,
      sd: z.array(z.number().nullable()),
      meanStandardError: z.array(z.number().nullable()),
      sdStandardError: z.array(z.number().nullable()),
      /** Variance / mean; null where the mean is 0. */
      fano: z.array(z.number().nullable()),
      fanoStandardError: z.array(z.number().nullable()),
      /** Coefficient of variation, SD / mean; null where the mean is 0. */
      cv: z.array(z.number().nullable()),
      cvStandardError: z.array(z.number().nullable()),
      quantiles: z.record(z.string(), numbers),
    }),
  ),
  events: z.object({ total: count, meanPerReplicate: z.number(), sdPerReplicate: z.number().nullable() }),
});
export type StatisticsDocument = z.infer<typeof statisticsDocument>;

export const jobStatistics = contract({
  id: 'jobStatistics',
  feature: 'jobs',
  method: 'GET',
  path: `${jobPath}/{job}/statistics`,
  summary: 'Estimates with their errors at every grid time, over the complete prefix so far',
  access: { kind: 'team', permission: 'results:read' },
  query: z.object({ point }),
  answers: [{ status: 200, description: 'Statistics', schema: statisticsDocument }],
  refusals: [...reading, 'invalid_input', 'results_not_ready'],
});

const withInterval = z.object({ value: z.number(), lower: z.number(), upper: z.number() });
const withError = z.object({ value: z.number(), standardError: z.number().nullable() });

export const passagesDocument = z.object({
  replicates: count,
  horizon: z.number(),
  times: numbers,
  passages: z.array(
    passageDocument.extend({
      passed: count,
      /** P(passed by the horizon), 95 % score interval (Wilson). A replicate absorbed before passing has not passed. */
      probability: withInterval,
      /** Mean of the smaller of passage time and horizon. */
      restrictedMean: withError,
      /** Only where every replicate passed. */
      mean: withError.nullable(),
      /** By probability; null: not reached by the horizon, or not bounded by so few replicates. */
      quantiles: z.record(
        z.string(),
        z.object({ value: z.number().nullable(), lower: z.number().nullable(), upper: z.number().nullable() }),
      ),
      /** P(passed by t) at `times`, with 95 % score intervals. */
      curve: z.object({ probability: numbers, lower: numbers, upper: numbers }),
    }),
  ),
});
export type PassagesDocument = z.infer<typeof passagesDocument>;

export const jobPassages = contract({
  id: 'jobPassages',
  feature: 'jobs',
  method: 'GET',
  path: `${jobPath}/{job}/passages`,
  summary: 'First passages asked for at launch: probabilities, restricted means and quantiles with their errors',
  access: { kind: 'team', permission: 'results:read' },
  query: z.object({ point }),
  answers: [{ status: 200, description: 'First passages', schema: passagesDocument }],
  refusals: [...reading, 'invalid_input', 'results_not_ready'],
});

const orNulls = z.array(z.number().nullable());

export const correlationsDocument = z.object({
  replicates: count,
  times: numbers,
  /** Every two of the observables asked for at launch; none when none were. Null where a number does not exist. */
  pairs: z.array(
    z.object({
      observables: z.tuple([z.string(), z.string()]),
      covariance: orNulls,
      covarianceStandardError: orNulls,
      correlation: orNulls,
      correlationStandardError: orNulls,
    }),
  ),
});
export type CorrelationsDocument = z.infer<typeof correlationsDocument>;

export const jobCorrelations = contract({
  id: 'jobCorrelations',
  feature: 'jobs',
  method: 'GET',
  path: `${jobPath}/{job}/correlations`,
  summary: 'Covariances and correlations asked for at launch, with delta-method standard errors, at every grid time',
  access: { kind: 'team', permission: 'results:read' },
  query: z.object({ point }),
  answers: [{ status: 200, description: 'Covariances and correlations', schema: correlationsDocument }],
  refusals: [...reading, 'invalid_input', 'results_not_ready'],
});

export const jobDistribution = contract({
  id: 'jobDistribution',
  feature: 'jobs',
  method: 'GET',
  path: `${jobPath}/{job}/distribution`,
  summary: 'How often each value of one observable occurred at one grid time',
  access: { kind: 'team', permission: 'results:read' },
  query: z.object({ observable: id, time: z.coerce.number().min(0), point }),
  answers: [
    {
      status: 200,
      description: 'The distribution at the grid time nearest to `time`',
      schema: z.object({
        replicates: count,
        observable: z.string(),
        time: z.number(),
        values: numbers,
        /** 1 where the count is exact for one value. */
        widths: numbers,
        counts: z.array(count),
        /** Hartigan's dip test; null where it says nothing: few replicates, real numbers, counts from 4096 on. */
        modes: z
          .object({ dip: z.number(), pValue: z.number(), uniformSamples: count, moreThanOne: z.boolean() })
          .nullable(),
      }),
    },
  ],
  refusals: [...reading, 'invalid_input', 'results_not_ready'],
});

export const jobTraces = contract({
  id: 'jobTraces',
  feature: 'jobs',
  method: 'GET',
  path: `${jobPath}/{job}/traces`,
  summary: 'The first whole traces, on the grid',
  access: { kind: 'team', permission: 'results:read' },
  query: z.object({ point, limit: z.coerce.number().int().min(1).max(limits.keptTraces).optional() }),
  answers: [
    {
      status: 200,
      description: 'Traces',
      schema: z.object({
        times: numbers,
        observables: z.array(z.string()),
        /** `values[observable][time]`. */
        traces: z.array(z.object({ replicate: count, values: z.array(numbers) })),
      }),
    },
  ],
  refusals: [...reading, 'invalid_input', 'results_not_ready'],
});

export const batchCellStates = ['waiting', 'running', 'computed', 'delivered', 'discarded'] as const;

export const jobBatches = contract({
  id: 'jobBatches',
  feature: 'jobs',
  method: 'GET',
  path: `${jobPath}/{job}/batches`,
  summary: 'The plan as a strip of cells, neighbours grouped so that there are at most `cells` of them',
  access: { kind: 'team', permission: 'jobs:read' },
  query: z.object({ cells: z.coerce.number().int().min(1).max(1_000).default(120) }),
  answers: [
    {
      status: 200,
      description: 'Cells in order of replicates',
      schema: z.object({
        batches: z.number().int(),
        cells: z.array(
          z.object({
            firstReplicate: count,
            replicates: count,
            /** The least advanced state of the batches in the cell; `computed` waits for earlier ones to join. */
            state: z.enum(batchCellStates),
            batches: z.number().int(),
            events: count,
            /** Worker seconds. */
            seconds: z.number(),
          }),
        ),
      }),
    },
  ],
  refusals: [...reading, 'invalid_input'],
});

export const jobContracts = [
  createQuote,
  readQuote,
  launchJob,
  listJobs,
  readJob,
  cancelJob,
  extendJob,
  jobProgress,
  jobStatistics,
  jobDistribution,
  jobPassages,
  jobCorrelations,
  jobTraces,
  jobBatches,
];
