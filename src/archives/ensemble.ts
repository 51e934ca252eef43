/** The ensemble of a prefix, joined batch by batch: one sample at each point, all of the same size. */
import type { EnsembleSummary, Trace } from '@/engine/ensemble.ts';
import { joined } from '@/engine/statistics/block-collector.ts';
import { recordsOf, type BlockShare, type Records } from '@/engine/statistics/blocks.ts';
import { decodeSummary } from '@/engine/statistics/summary.ts';
import type { BatchContent, PointContent } from './batch-file.ts';

/** The replicates of one point. */
export interface PointEnsemble {
  summary: EnsembleSummary;
  /** Events per replicate, in order, in pieces. */
  events: Float64Array[];
  /** Times of first passage, by passage, in pieces. */
  passages: Float64Array[][];
  traces: Trace[];
}

export interface Ensemble {
  /** At each point. */
  replicates: number;
  /** Empty while no replicate is complete. */
  points: PointEnsemble[];
  kernel: string;
  engineVersion: string;
}

/** An ensemble without a replicate. */
export const emptyEnsemble = (): Ensemble => ({ replicates: 0, points: [], kernel: '', engineVersion: '' });

/** Adds the next batch of the prefix. Throws when it is another one. */
export function addBatch(ensemble: Ensemble, content: BatchContent): void {
  if (content.firstReplicate !== ensemble.replicates)
    throw new Error(`Replicate ${ensemble.replicates} was expected next, not ${content.firstReplicate}.`);
  if (ensemble.points.length === 0) ensemble.points = content.points.map(startOf);
  else for (const [point, more] of content.points.entries()) addPoint(ensemble.points[point]!, more);
  ensemble.replicates += content.replicateCount;
  ensemble.kernel = content.kernel;
  ensemble.engineVersion = content.engineVersion;
}

function startOf(content: PointContent): PointEnsemble {
  const [events, ...passages] = recordsOf(content);
  return {
    summary: decodeSummary(content.summary),
    events: [events!],
    passages: passages.map((times) => [times]),
    traces: [...content.traces],
  };
}

function addPoint(point: PointEnsemble, content: PointContent): void {
  point.summary.merge(decodeSummary(content.summary));
  const [events, ...passages] = recordsOf(content);
  point.events.push(events!);
  for (const [passage, times] of passages.entries()) point.passages[passage]!.push(times);
  point.traces.push(...content.traces);
}

/** The prefix as one batch, for its file. `blocks`: by point. */
export function asBatch({ replicates, points, kernel, engineVersion }: Ensemble, blocks: BlockShare[]): BatchContent {
  if (points.length === 0) throw new Error('An empty prefix has no results.');
  return {
    firstReplicate: 0,
    replicateCount: replicates,
    kernel,
    engineVersion,
    failure: null,
    points: points.map((point, index) => ({
      eventsPerReplicate: joined(point.events),
      passageTimes: joined(point.passages.map(joined)),
      summary: point.summary.encode(),
      traces: point.traces,
      blocks: blocks[index]!,
    })),
  };
}

/** Of all replicates, column by column. */
export const recordsOfPoint = ({ events, passages }: PointEnsemble): Records => [
  joined(events),
  ...passages.map(joined),
];
