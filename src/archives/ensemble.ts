/** The ensemble of a prefix, joined batch by batch. */
import type { EnsembleSummary, Trace } from '@/engine/ensemble.ts';
import { joined } from '@/engine/statistics/block-collector.ts';
import { recordsOf, type BlockShare, type Records } from '@/engine/statistics/blocks.ts';
import { decodeSummary } from '@/engine/statistics/summary.ts';
import type { BatchContent } from './batch-file.ts';

export interface Ensemble {
  replicates: number;
  /** Null while no replicate is complete. */
  summary: EnsembleSummary | null;
  /** Events per replicate, in order, in pieces. */
  events: Float64Array[];
  /** Times of first passage, by passage, in pieces. */
  passages: Float64Array[][];
  traces: Trace[];
  kernel: string;
  engineVersion: string;
}

/** An ensemble without a replicate. */
export const emptyEnsemble = (): Ensemble => ({
  replicates: 0,
  summary: null,
  events: [],
  passages: [],
  traces: [],
  kernel: '',
  engineVersion: '',
});

/** Adds the next batch of the prefix. Throws when it is another one. */
export function addBatch(ensemble: Ensemble, content: BatchContent): void {
  if (content.firstReplicate !== ensemble.replicates)
    throw new Error(`Replicate ${ensemble.replicates} was expected next, not ${content.firstReplicate}.`);
  const summary = decodeSummary(content.summary);
  if (ensemble.summary) ensemble.summary.merge(summary);
  else ensemble.summary = summary;
  ensemble.replicates += content.replicateCount;
  const [events, ...passages] = recordsOf(content);
  ensemble.events.push(events!);
  for (const [passage, times] of passages.entries()) (ensemble.passages[passage] ??= []).push(times);
  ensemble.traces.push(...content.traces);
  ensemble.kernel = content.kernel;
  ensemble.engineVersion = content.engineVersion;
}

/** The prefix as one batch, for its file. */
export function asBatch(ensemble: Ensemble, blocks: BlockShare): BatchContent {
  if (!ensemble.summary) throw new Error('An empty prefix has no results.');
  return {
    firstReplicate: 0,
    replicateCount: ensemble.replicates,
    kernel: ensemble.kernel,
    engineVersion: ensemble.engineVersion,
    eventsPerReplicate: joined(ensemble.events),
    passageTimes: joined(ensemble.passages.map(joined)),
    summary: ensemble.summary.encode(),
    traces: ensemble.traces,
    blocks,
    failure: null,
  };
}

/** Of all replicates, column by column. */
export const recordsOfEnsemble = ({ events, passages }: Ensemble): Records => [joined(events), ...passages.map(joined)];
