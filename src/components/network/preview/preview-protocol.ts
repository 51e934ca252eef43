/** What the preview's worker is asked and answers. */
import type { NetworkDocument } from '@/domain/network/document.ts';

export interface PreviewTask {
  /** Counts up; answers to older tasks are of no interest. */
  turn: number;
  network: NetworkDocument;
  /** Simulated time; null: one is found by running the model. */
  horizon: number | null;
}

export interface PreviewTraces {
  horizon: number;
  times: number[];
  observables: { id: string; name?: string | undefined }[];
  /** One row per complete replicate: observables × times, observable by observable. */
  traces: Float64Array[];
  replicatesAsked: number;
  /** Firings of all complete replicates. */
  events: number;
  /** What the engine itself took, in milliseconds. */
  milliseconds: number;
}

export interface MeanFieldCurves {
  observables: { id: string; values: number[] }[];
}

export type PreviewAnswer =
  | { turn: number; kind: 'traces'; preview: PreviewTraces }
  /** Follows the traces where the rate equations can be solved. */
  | { turn: number; kind: 'meanField'; curves: MeanFieldCurves }
  /** Nothing to draw, and why in a sentence; `waits`: the checks beside it say more. */
  | { turn: number; kind: 'none'; reason: string; waits: boolean };

/** Ends the answers to a task. */
export interface PreviewEnd {
  turn: number;
  kind: 'end';
}
