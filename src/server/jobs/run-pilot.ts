/** Runs a pilot: real replicates of their own stream, bounded in events and seconds, remembered by what shapes them. */
import PQueue from 'p-queue';
import { Op } from 'sequelize';
import { inWriteTransaction } from '@db/in-write-transaction.ts';
import { Pilot, PilotRun } from '@db/models/jobs.ts';
import { describeFailure, sortedEntries, type JobInputs } from '@/domain/jobs/job-inputs.ts';
import { summarisePilot } from '@/domain/jobs/quote-estimate.ts';
import type { HorizonMean } from '@/domain/jobs/method-comparison.ts';
import { limits } from '@/domain/limits.ts';
import type { ResolvedNetwork } from '@/domain/network/resolved.ts';
import { accept, refuse, type Result } from '@/domain/refusals.ts';
import type { ModelFailure } from '@/engine/ensemble.ts';
import { momentsAt } from '@/engine/statistics/statistics-of.ts';
import { decodeSummary, type Summary } from '@/engine/statistics/summary.ts';
import { engineVersion } from '@/engine/engine-version.ts';
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

export interface PilotOptions {
  teamId: string;
  userId: string;
  modelVersionId: string;
  network: ResolvedNetwork;
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
    const run = await runSteps(options, cacheKey);
    if (!run.ok) return run;
    const pilot = await remember(options, cacheKey, run.value);
    return accept({ pilot, cached: false });
  });
}

/** Replicates, seed, lane and kept traces shape no pilot replicate. */
function keyOf({ modelVersionId, inputs }: PilotOptions): string {
  const { horizon, gridIntervals, method, epsilon, overrides, eventBudgetPerReplicate } = inputs;
  return sha256Hex(
    JSON.stringify([
      engineVersion,
      modelVersionId,
      horizon,
      gridIntervals,
      epsilon === undefined ? method : [method, epsilon],
      sortedEntries(overrides.parameters),
      sortedEntries(overrides.initialCounts),
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
  eventsPerReplicate: number[];
  /** Events of the replicate that the event budget cut, as far as it got; null when none was. */
  cutReplicateEvents: number | null;
  seconds: number;
  /** From the last step, when code and caches are warm. */
  secondsPerReplicate: number;
  kernel: string;
  /** Of the complete replicates; null before the first. */
  summary: Summary | null;
}

async function runSteps(options: PilotOptions, cacheKey: string): Promise<Result<Steps>> {
  const done: Steps = {
    eventsPerReplicate: [],
    cutReplicateEvents: null,
    seconds: 0,
    secondsPerReplicate: 0,
    kernel: '',
    summary: null,
  };
  let events = 0;
  const outOfTime = AbortSignal.timeout(limits.pilotSeconds * 1000);
  for (const replicateCount of steps) {
    const budget = limits.pilotEvents - events;
    const answer = await runStep(options, cacheKey, done.eventsPerReplicate.length, replicateCount, budget, outOfTime);
    if (answer === null) break;
    done.kernel = answer.kernel;
    const summary = decodeSummary(answer.summary);
    if (done.summary === null) done.summary = summary;
    else done.summary.merge(summary);
    done.seconds += answer.seconds;
    const ofStep = Array.from(answer.eventsPerReplicate);
    done.eventsPerReplicate.push(...ofStep);
    const stepEvents = ofStep.reduce((sum, value) => sum + value, 0);
    events += stepEvents;
    if (ofStep.length > 0) done.secondsPerReplicate = answer.seconds / ofStep.length;
    if (answer.failure) return failed(answer.failure, done.eventsPerReplicate.length);
    if (answer.replicateCount < replicateCount) {
      done.cutReplicateEvents = Math.max(0, budget - stepEvents);
      break;
    }
  }
  if (done.eventsPerReplicate.length === 0)
    return refuse(
      'pilot_failed',
      `Not one replicate ended within a pilot's ${limits.pilotEvents.toLocaleString('en')} events and ` +
        `${limits.pilotSeconds} seconds, so no price can be given. Shorten the horizon, or check the model for growth without bound.`,
    );
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
        network: options.network,
        horizon,
        gridIntervals,
        // Any fixed number will do: pilots have a stream of their own. This one makes equal requests equal.
        seed: BigInt(`0x${cacheKey.slice(0, 16)}`).toString(),
        purpose: 'pilot',
        point: 0,
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

async function remember(options: PilotOptions, cacheKey: string, run: Steps): Promise<Pilot> {
  const summary = summarisePilot(run);
  return inWriteTransaction(() =>
    Pilot.create({
      cacheKey,
      teamId: options.teamId,
      userId: options.userId,
      modelVersionId: options.modelVersionId,
      replicates: summary.replicates,
      cutReplicates: run.cutReplicateEvents === null ? 0 : 1,
      events: Math.round(summary.mean * summary.replicates),
      mean: summary.mean,
      sd: summary.sd,
      seconds: run.seconds,
      secondsPerReplicate: run.secondsPerReplicate,
      kernel: run.kernel,
      atHorizon: atHorizon(run.summary!),
      engineVersion,
      createdAt: nowText(),
    }),
  );
}
