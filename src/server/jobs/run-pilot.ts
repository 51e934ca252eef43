/** Runs a pilot: real replicates of their own stream, bounded in events and seconds, remembered by what shapes them. */
import PQueue from 'p-queue';
import { Op } from 'sequelize';
import { inWriteTransaction } from '@db/in-write-transaction.ts';
import { Pilot, PilotRun } from '@db/models/jobs.ts';
import { describeFailure, sortedEntries, type JobInputs } from '@/domain/jobs/job-inputs.ts';
import { samplingError, summarisePilot, type PilotSummary } from '@/domain/jobs/quote-estimate.ts';
import type { HorizonMean } from '@/domain/jobs/method-comparison.ts';
import { limits } from '@/domain/limits.ts';
import type { ResolvedNetwork } from '@/domain/network/resolved.ts';
import { accept, refuse, type Result } from '@/domain/refusals.ts';
import type { ModelFailure } from '@/engine/ensemble.ts';
import { momentsAt } from '@/engine/statistics/statistics-of.ts';
import { decodeSummary, type Summary } from '@/engine/statistics/summary.ts';
import { engineVersion } from '@/engine/engine-version.ts';
import { eventsPerCycle } from '@/engine/run-points.ts';
import type { RunBatchAnswer } from '@workers/protocol.ts';
import { nowText } from '../clock.ts';
import { newId } from '../ids.ts';
import { executor } from './executor.ts';
import { sha256Hex } from '@/archives/batch-file.ts';

/** One pilot at a time, so that pilots take at most one worker. */
const queue = new PQueue({ concurrency: 1 });
const waitingPilotsMost = 50;

/** Replicates of each step: small steps first, so that the clock can stop a slow pilot with something in hand. */
const steps = [4, 16, 60, limits.pilotReplicatesMinimum - 80];
/** Points of a sweep that a pilot looks at; fewer when not one cycle of so many fits its budget. */
const sampleSizes = [40, 10, 3];

export interface PilotOptions {
  teamId: string;
  userId: string;
  modelVersionId: string;
  /** By point. */
  networks: ResolvedNetwork[];
  inputs: JobInputs;
}

/** The pilot of these inputs, from memory or run now. */
export async function runPilot(options: PilotOptions): Promise<Result<{ pilot: Pilot; cached: boolean }>> {
  const cacheKey = keyOf(options);
  const known = await Pilot.findByPk(cacheKey);
  if (known) return accept({ pilot: known, cached: true });
  const limited = await countPilot(options.userId);
  if (!limited.ok) return limited;
  if (queue.size >= waitingPilotsMost)
    return refuse('rate_limited', 'Many quotes are being worked out just now. Try again in a moment.', {
      retryAfterSeconds: 10,
    });
  return queue.add(async () => {
    // The same pilot may have run while this one waited.
    const meanwhile = await Pilot.findByPk(cacheKey);
    if (meanwhile) return accept({ pilot: meanwhile, cached: true });
    const run = await runSamples(options, cacheKey);
    if (!run.ok) return run;
    const pilot = await remember(options, cacheKey, run.value);
    return accept({ pilot, cached: false });
  });
}

/** Replicates, seed, lane and kept traces shape no pilot replicate. */
function keyOf({ modelVersionId, inputs }: PilotOptions): string {
  const { horizon, gridIntervals, method, epsilon, overrides, sweep, eventBudgetPerReplicate } = inputs;
  return sha256Hex(
    JSON.stringify([
      engineVersion,
      modelVersionId,
      horizon,
      gridIntervals,
      epsilon === undefined ? method : [method, epsilon],
      sortedEntries(overrides.parameters),
      sortedEntries(overrides.initialCounts),
      sortedEntries(overrides.changeTimes),
      sweep && [sweep.targets.map(({ kind, id }) => [kind, id]), sweep.values],
      eventBudgetPerReplicate,
    ]),
  );
}

async function countPilot(userId: string): Promise<Result<null>> {
  return inWriteTransaction(async () => {
    const hourAgo = nowText(-3_600_000);
    await PilotRun.destroy({ where: { userId, createdAt: { [Op.lte]: hourAgo } } });
    const ran = await PilotRun.count({ where: { userId } });
    if (ran >= limits.pilotsPerMemberAndHour)
      return refuse(
        'rate_limited',
        `A member may run ${limits.pilotsPerMemberAndHour} pilots an hour. Quotes that were worked out before are still answered.`,
        { retryAfterSeconds: 600 },
      );
    await PilotRun.create({ id: newId('pilot'), userId, createdAt: nowText() });
    return accept(null);
  });
}

interface Steps {
  /** Events of each replicate at every point of the sample together. */
  eventsPerCycle: number[];
  /** By point of the sample. */
  eventsAtPoints: number[];
  /** Events of the replicate that the event budget cut, as far as it got; null when none was, or with several points. */
  cutReplicateEvents: number | null;
  isCut: boolean;
  events: number;
  seconds: number;
  /** Of a cycle; from the last step, when code and caches are warm. */
  secondsPerCycle: number;
  kernel: string;
  /** Of the complete replicates at the first point; null before one is. */
  firstPoint: Summary | null;
}

/** What a cycle over all points is expected to cost. */
interface PilotRunOutcome {
  summary: PilotSummary;
  isCut: boolean;
  events: number;
  seconds: number;
  secondsPerReplicate: number;
  kernel: string;
  /** At the first point. */
  atHorizon: HorizonMean[];
}

async function runSamples(options: PilotOptions, cacheKey: string): Promise<Result<PilotRunOutcome>> {
  const { networks } = options;
  const sizes = sampleSizes.map((size) => Math.min(size, networks.length));
  for (const size of new Set(sizes)) {
    const sample = samplePoints(networks.length, size);
    const run = await runSteps({ ...options, networks: sample.map((point) => networks[point]!) }, cacheKey);
    if (!run.ok) return run;
    if (run.value.eventsPerCycle.length > 0) return accept(outcomeOf(run.value, networks.length));
  }
  return refuse(
    'pilot_failed',
    `Not one replicate ended within a pilot's ${limits.pilotEvents.toLocaleString('en')} events and ` +
      `${limits.pilotSeconds} seconds, so no price can be given. Shorten the horizon, or check the model for growth without bound.`,
  );
}

/** `size` points, evenly spread over the sweep's order, its first and last among them. */
const samplePoints = (points: number, size: number): number[] =>
  Array.from({ length: size }, (_, i) => (size === 1 ? 0 : Math.round((i * (points - 1)) / (size - 1))));

function outcomeOf(run: Steps, points: number): PilotRunOutcome {
  const sampled = run.eventsAtPoints.length;
  const scale = points / sampled;
  const { replicates, mean, sd, oneSided } = summarisePilot({
    eventsPerReplicate: run.eventsPerCycle,
    cutReplicateEvents: run.cutReplicateEvents,
  });
  const leftOut = samplingError(
    run.eventsAtPoints.map((events) => events / run.eventsPerCycle.length),
    points,
  );
  return {
    // The error of the points left out is one for all replicates; spread over the pilot's it widens the interval as it should.
    summary: {
      replicates,
      mean: mean * scale,
      sd: Math.hypot(sd * scale, leftOut * Math.sqrt(replicates)),
      oneSided: oneSided || run.isCut,
    },
    isCut: run.isCut,
    events: run.events,
    seconds: run.seconds,
    secondsPerReplicate: run.secondsPerCycle * scale,
    kernel: run.kernel,
    atHorizon: run.firstPoint ? atHorizon(run.firstPoint) : [],
  };
}

async function runSteps(options: PilotOptions, cacheKey: string): Promise<Result<Steps>> {
  const { networks } = options;
  const done: Steps = {
    eventsPerCycle: [],
    eventsAtPoints: networks.map(() => 0),
    cutReplicateEvents: null,
    isCut: false,
    events: 0,
    seconds: 0,
    secondsPerCycle: 0,
    kernel: '',
    firstPoint: null,
  };
  const outOfTime = AbortSignal.timeout(limits.pilotSeconds * 1000);
  for (const step of steps) {
    if (done.eventsPerCycle.length * networks.length >= limits.pilotReplicatesMinimum) break;
    const replicateCount = Math.max(steps[0]!, Math.ceil(step / networks.length));
    const budget = limits.pilotEvents - done.events;
    const answer = await runStep(options, cacheKey, done.eventsPerCycle.length, replicateCount, budget, outOfTime);
    if (answer === null) break;
    done.kernel = answer.kernel;
    const [point] = answer.points;
    if (point && done.firstPoint) done.firstPoint.merge(decodeSummary(point.summary));
    else if (point) done.firstPoint = decodeSummary(point.summary);
    done.seconds += answer.seconds;
    const ofStep = Array.from(eventsPerCycle(answer.points));
    done.eventsPerCycle.push(...ofStep);
    for (const [point, { eventsPerReplicate }] of answer.points.entries())
      done.eventsAtPoints[point]! += eventsPerReplicate.reduce((sum, value) => sum + value, 0);
    const stepEvents = ofStep.reduce((sum, value) => sum + value, 0);
    done.events += stepEvents;
    if (ofStep.length > 0) done.secondsPerCycle = answer.seconds / ofStep.length;
    if (answer.failure) return failed(answer.failure, done.eventsPerCycle.length);
    if (answer.replicateCount < replicateCount) {
      done.isCut = true;
      if (networks.length === 1) done.cutReplicateEvents = Math.max(0, budget - stepEvents);
      break;
    }
  }
  return accept(done);
}

/** Null when the pilot's time was up. */
async function runStep(
  options: PilotOptions,
  cacheKey: string,
  firstReplicate: number,
  replicateCount: number,
  eventBudgetPerBatch: number,
  signal: AbortSignal,
): Promise<RunBatchAnswer | null> {
  const { horizon, gridIntervals, epsilon, eventBudgetPerReplicate } = options.inputs;
  try {
    return await executor().run(
      {
        networks: options.networks,
        horizon,
        gridIntervals,
        // Any fixed number will do: pilots have a stream of their own. This one makes equal requests equal.
        seed: BigInt(`0x${cacheKey.slice(0, 16)}`).toString(),
        purpose: 'pilot',
        firstReplicate,
        replicateCount,
        keptTraces: 0,
        eventBudgetPerReplicate,
        eventBudgetPerBatch,
        ...(epsilon === undefined ? {} : { epsilon }),
      },
      { signal },
    );
  } catch (error) {
    if (signal.aborted) return null;
    throw error;
  }
}

const failed = (failure: ModelFailure, complete: number): Result<never> =>
  refuse(
    'pilot_failed',
    `The model failed in the pilot after ${complete} complete replicates. ${describeFailure(failure).split('. ')[0]}. ` +
      'Mend the model or its parameters; nothing was charged.',
    {
      errors: [
        {
          path: failure.reaction === null ? 'model' : `reactions.${failure.reaction}`,
          code: failure.kind,
          message: `At time ${failure.time} with ${Object.entries(failure.state)
            .slice(0, 20)
            .map(([species, value]) => `${species} = ${value}`)
            .join(', ')}.`,
        },
      ],
    },
  );

/** Means and sds at the last grid time, for comparisons; numbers that so few replicates cannot give are 0. */
function atHorizon(summary: Summary): HorizonMean[] {
  return summary.observables.map((id, observable) => {
    const { mean, sd } = momentsAt(summary, observable, summary.gridPoints - 1);
    return { id, mean, sd: Number.isFinite(sd) ? sd : 0 };
  });
}

async function remember(options: PilotOptions, cacheKey: string, run: PilotRunOutcome): Promise<Pilot> {
  const { summary } = run;
  return inWriteTransaction(() =>
    Pilot.create({
      cacheKey,
      teamId: options.teamId,
      userId: options.userId,
      modelVersionId: options.modelVersionId,
      replicates: summary.replicates,
      cutReplicates: run.isCut ? 1 : 0,
      events: run.events,
      mean: summary.mean,
      sd: summary.sd,
      seconds: run.seconds,
      secondsPerReplicate: run.secondsPerReplicate,
      kernel: run.kernel,
      atHorizon: run.atHorizon,
      engineVersion,
      createdAt: nowText(),
    }),
  );
}
