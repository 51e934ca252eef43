/** Quotes a job: checks the request, runs a pilot, and pins inputs and price until the quote expires. */
import { randomBytes } from 'node:crypto';
import { ModelVersion } from '@db/models/models.ts';
import { Quote, type Pilot } from '@db/models/jobs.ts';
import type { QuoteDocument } from '@/contracts/jobs.ts';
import type { JobInputs } from '@/domain/jobs/job-inputs.ts';
import {
  estimateArchiveBytes,
  leastCap,
  predictEvents,
  priceEvents,
  secondsByLane,
  type PilotSummary,
} from '@/domain/jobs/quote-estimate.ts';
import { pointsOf, type Sweep } from '@/domain/jobs/sweep.ts';
import { histogramTimes } from '@/domain/jobs/result-outputs.ts';
import { defaultEpsilon } from '@/domain/jobs/method-comparison.ts';
import { limits } from '@/domain/limits.ts';
import { checkNetwork } from '@/domain/network/check-network.ts';
import type { ResolvedNetwork } from '@/domain/network/resolved.ts';
import { rateOf, type PriceBook } from '@/domain/pricing/price-book.ts';
import { accept, refuse, type Result } from '@/domain/refusals.ts';
import type { Actor } from '@/domain/teams/actor.ts';
import { presentPriceBook } from '../billing/present-price-book.ts';
import { nowText } from '../clock.ts';
import { answerOnce, recallAnswer, type Idempotency } from '../http/answer-once.ts';
import { newId } from '../ids.ts';
import { authorise } from '../teams/authorise.ts';
import {
  checkQuoteRequest,
  defaultKeptTraces,
  passagesOf,
  stoppingOf,
  type QuoteRequest,
} from './check-quote-request.ts';
import { compareMethods } from './compare-methods.ts';
import { executor } from './executor.ts';
import { presentQuote } from './present-quote.ts';
import { queueLoad } from './queue-load.ts';
import { runPilot } from './run-pilot.ts';

/** The highest total that the meter can count exactly. */
const eventsMost = Number.MAX_SAFE_INTEGER;

export async function createQuote(options: {
  actor: Actor;
  team: string;
  request: QuoteRequest;
  idempotency?: Idempotency | undefined;
}): Promise<Result<{ quote: QuoteDocument }>> {
  const { actor, request } = options;
  const authorised = await authorise({ actor, team: options.team, permission: 'jobs:launch' });
  if (!authorised.ok) return authorised;
  const { team, userId } = authorised.value;
  if (userId === null) return refuse('forbidden', 'Quotes are asked for by people.');
  const recalled = await recallAnswer<{ quote: QuoteDocument }>(options.idempotency);
  if (recalled) return recalled;

  const version = await ModelVersion.findOne({ where: { id: request.modelVersionId, teamId: team.id } });
  if (!version)
    return refuse('not_found', 'There is no such model version in this team.', {
      errors: [{ path: 'modelVersionId', code: 'not_found', message: 'Unknown model version.' }],
    });
  const checked = checkQuoteRequest(request, version.document);
  if (!checked.ok) return checked;
  const { networks, sweep } = checked.value;
  const network = networks[0]!;
  const inputs = inputsOf(request, network, sweep);
  const forPilot = { teamId: team.id, userId, modelVersionId: version.id, networks, inputs };
  const ran = await runPilot(forPilot);
  if (!ran.ok) return ran;

  const priced = await price(inputs, ran.value.pilot);
  if (!priced.ok) return priced;
  const answer = {
    ...priced.value.answer,
    comparison: await compareMethods(forPilot, ran.value.pilot, priced.value.book),
    archiveBytes: estimateArchiveBytes({
      replicates: inputs.replicates,
      gridPoints: inputs.gridIntervals + 1,
      histogramTimes: histogramTimes(inputs.gridIntervals).length,
      observables: network.observables.length,
      points: networks.length,
      keptTraces: inputs.keptTraces,
      documentBytes: JSON.stringify(version.document).length,
    }),
    pilot: {
      replicates: ran.value.pilot.replicates,
      events: ran.value.pilot.events,
      cutReplicates: ran.value.pilot.cutReplicates,
      cached: ran.value.cached,
    },
    problems: checkNetwork(version.document),
  };
  return answerOnce(options.idempotency, async () => {
    const quote = await Quote.create({
      id: newId('quote'),
      teamId: team.id,
      userId,
      modelVersionId: version.id,
      inputs,
      answer,
      ...priced.value.row,
      createdAt: nowText(),
      expiresAt: nowText(limits.quoteMinutes * 60_000),
    });
    return accept({ quote: presentQuote(quote) });
  });
}

/** The inputs as they are pinned: defaults filled in, a seed drawn where none was given. */
function inputsOf(request: QuoteRequest, network: ResolvedNetwork, sweep: Sweep | undefined): JobInputs {
  const { replicates, horizon, gridIntervals, method, epsilon = defaultEpsilon, lane } = request;
  const stopping = stoppingOf(request);
  return {
    replicates,
    horizon,
    gridIntervals,
    method,
    ...(method === 'leap' ? { epsilon } : {}),
    // "007" and 7 are one seed.
    seed: request.seed === undefined ? drawSeed() : BigInt(request.seed).toString(),
    lane,
    overrides: request.overrides ?? {},
    ...(sweep ? { sweep } : {}),
    keptTraces: request.outputs?.keptTraces ?? defaultKeptTraces(request, network, pointsOf({ sweep })),
    passages: passagesOf(request),
    ...(request.outputs?.correlations ? { correlations: request.outputs.correlations } : {}),
    ...(stopping ? { stopping } : {}),
    eventBudgetPerReplicate: limits.eventsPerReplicate,
  };
}

const drawSeed = (): string => randomBytes(8).readBigUInt64LE().toString();

async function price(inputs: JobInputs, pilot: Pilot): Promise<Result<Priced>> {
  const book = await presentPriceBook();
  const rate = rateOf(book, inputs.lane, inputs.method);
  const summary: PilotSummary = { ...pilot.get(), oneSided: pilot.cutReplicates > 0 };
  const events = predictEvents(summary, inputs.replicates);
  if (events.high * Math.max(1, rate / 1e6) > eventsMost)
    return refuse(
      'invalid_input',
      `About ${events.expected.toExponential(1)} events are more than one job can meter. Ask for fewer replicates or a shorter horizon.`,
      { errors: [{ path: 'replicates', code: 'too_many_events', message: 'More events than one job can meter.' }] },
    );
  const microcredits = priceEvents(events, rate);
  const least = leastCap({
    pilot: summary,
    replicates: inputs.replicates,
    fewest: limits.capReplicatesMinimum,
    microcreditsPerMillionEvents: rate,
  });
  return accept(await pricedAnswer({ inputs, pilot, summary, book, rate, microcredits, least }));
}

type Priced = Awaited<ReturnType<typeof pricedAnswer>>;

async function pricedAnswer(options: {
  inputs: JobInputs;
  pilot: Pilot;
  summary: PilotSummary;
  book: PriceBook;
  rate: number;
  microcredits: { expected: number; low: number; high: number };
  least: number;
}) {
  const { inputs, pilot, summary, book, rate, microcredits, least } = options;
  return {
    row: {
      priceBookId: book.id,
      microcreditsPerMillionEvents: rate,
      expectedMicrocredits: microcredits.expected,
      // Few replicates may cost more than a prediction for all of them says; the cap covers both.
      highMicrocredits: Math.max(microcredits.high, least),
      leastCapMicrocredits: least,
      eventsPerReplicate: summary.mean,
      secondsPerReplicate: pilot.secondsPerReplicate,
    },
    book,
    answer: {
      eventsPerReplicate: { mean: summary.mean / pointsOf(inputs), sd: summary.sd / pointsOf(inputs) },
      microcredits: { ...microcredits, high: Math.max(microcredits.high, least) },
      oneSided: summary.oneSided,
      leastCapMicrocredits: least,
      secondsByLane: secondsByLane({
        workSeconds: pilot.secondsPerReplicate * inputs.replicates,
        load: await queueLoad(),
        workers: executor().capacity,
      }),
      lane: inputs.lane,
      microcreditsPerMillionEvents: rate,
      priceBookVersion: book.version,
      replicates: inputs.replicates,
      method: inputs.method,
      epsilon: inputs.epsilon ?? null,
      points: pointsOf(inputs),
      sweep: inputs.sweep ?? null,
      seed: inputs.seed,
      kernel: pilot.kernel,
      engineVersion: pilot.engineVersion,
    },
  };
}
