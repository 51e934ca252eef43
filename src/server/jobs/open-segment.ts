/** Opens a charge segment of a job under a quote: uses the quote up, holds the cap, writes the plan of batches. */
import { Batch, Job, Quote, Segment } from '@db/models/jobs.ts';
import { planBatches } from '@/domain/jobs/plan-batches.ts';
import { looksBetween } from '@/domain/jobs/precision.ts';
import { pointsOf } from '@/domain/jobs/sweep.ts';
import { limits } from '@/domain/limits.ts';
import { creditsText } from '@/domain/pricing/credits-text.ts';
import { accept, refuse, type Result } from '@/domain/refusals.ts';
import { nowText } from '../clock.ts';
import { newId } from '../ids.ts';
import { checkBudgets } from '../budgets/check-budgets.ts';
import { checkTokenCap } from '../budgets/check-token-cap.ts';
import { holdCredits } from '../ledger/hold-credits.ts';
import { Op } from 'sequelize';

/** The quote when it can still be launched by this team, in the order in which refusals take precedence. */
export async function findOpenQuote(options: { teamId: string; quoteId: string }): Promise<Result<Quote>> {
  const quote = await Quote.findOne({ where: { id: options.quoteId, teamId: options.teamId } });
  if (!quote)
    return refuse('not_found', 'There is no such quote in this team.', {
      errors: [{ path: 'quoteId', code: 'not_found', message: 'Unknown quote.' }],
    });
  if (quote.usedByJobId) return refuse('quote_used', 'A job was launched with this quote already. Ask for a new one.');
  if (quote.expiresAt <= nowText())
    return refuse('quote_expired', `This quote was good for ${limits.quoteMinutes} minutes. Ask for a new one.`);
  return accept(quote);
}

/** The cap asked for, or the quote's upper estimate; refused below what 30 replicates may need. */
export function capOf(quote: Quote, asked: number | undefined): Result<number> {
  const cap = asked ?? quote.highMicrocredits;
  if (cap > limits.integer) return refuse('invalid_input', 'A cap of so many credits cannot be held.');
  if (cap >= quote.leastCapMicrocredits) return accept(cap);
  return refuse(
    'cap_too_low',
    `A cap must cover the upper estimate of ${limits.capReplicatesMinimum} replicates (or of all, when fewer): ` +
      `${creditsText(quote.leastCapMicrocredits)}. Fewer would support no error bars. Nothing was started.`,
    { errors: [{ path: 'capMicrocredits', code: 'too_small', message: `At least ${quote.leastCapMicrocredits}.` }] },
  );
}

export async function checkOpenJobs(teamId: string): Promise<Result<null>> {
  const open = await Job.count({ where: { teamId, state: { [Op.in]: ['queued', 'running'] } } });
  return open < limits.openJobsPerTeam
    ? accept(null)
    : refuse(
        'too_many_jobs',
        `A team may have ${limits.openJobsPerTeam} open jobs. Wait for one to end, or cancel one.`,
      );
}

/** Inside a write transaction; a refusal must undo it (the caller returns it). `job` has been written. */
export async function openSegment(options: {
  job: Job;
  quote: Quote;
  userId: string;
  /** Of an actor that came with one. */
  tokenId: string | null;
  capMicrocredits: number;
  /** The first replicate of the segment. */
  firstReplicate: number;
  gridPoints: number;
  observables: number;
}): Promise<Result<Segment>> {
  const { job, quote, userId, tokenId, capMicrocredits, firstReplicate } = options;
  const byToken = await checkTokenCap({ tokenId, capMicrocredits });
  if (!byToken.ok) return byToken;
  const within = await checkBudgets({ teamId: job.teamId, projectCodeId: job.projectCodeId, capMicrocredits });
  if (!within.ok) return within;
  const segmentId = newId('segment');
  const held = await holdCredits({
    teamId: job.teamId,
    jobId: job.id,
    segmentId,
    amountMicrocredits: capMicrocredits,
    userId,
  });
  if (!held.ok) return held;
  const lastSegment = await Segment.max<number, Segment>('ordinal', { where: { jobId: job.id } });
  const lastBatch = await Batch.max<number, Batch>('ordinal', { where: { jobId: job.id } });
  const segment = await Segment.create({
    id: segmentId,
    jobId: job.id,
    ordinal: (lastSegment ?? -1) + 1,
    quoteId: quote.id,
    userId,
    tokenId,
    priceBookId: quote.priceBookId,
    microcreditsPerMillionEvents: quote.microcreditsPerMillionEvents,
    firstReplicate,
    replicateCount: quote.inputs.replicates,
    capMicrocredits,
    events: 0,
    chargedMicrocredits: 0,
  });
  await writePlan({ ...options, segment, firstOrdinal: (lastBatch ?? -1) + 1 });
  await quote.update({ usedByJobId: job.id });
  return accept(segment);
}

async function writePlan(options: {
  job: Job;
  quote: Quote;
  segment: Segment;
  firstOrdinal: number;
  gridPoints: number;
  observables: number;
}): Promise<void> {
  const { job, quote, segment, firstOrdinal, gridPoints, observables } = options;
  const planned = planBatches({
    firstReplicate: segment.firstReplicate,
    replicates: segment.replicateCount,
    eventsPerReplicate: quote.eventsPerReplicate,
    gridPoints,
    observables,
    points: pointsOf(job.inputs),
    firstOrdinal,
    endsAt: quote.inputs.stopping ? looksBetween(segment.firstReplicate, segment.replicateCount) : [],
  });
  const rows = planned.map((batch) => ({
    ...batch,
    point: 0,
    id: newId('batch'),
    jobId: job.id,
    segmentId: segment.id,
    state: 'planned' as const,
    completeReplicates: 0,
    events: 0,
    absorbedEvents: 0,
    seconds: 0,
  }));
  // One statement of 20,000 rows would be longer than SQLite reads.
  for (let start = 0; start < rows.length; start += 500) await Batch.bulkCreate(rows.slice(start, start + 500));
}
