/** What the mean-field worker is asked and answers. */
import type { NetworkDocument, Overrides } from '@/domain/network/document.ts';

export interface MeanFieldTask {
  network: NetworkDocument;
  overrides: Overrides;
  horizon: number;
  gridIntervals: number;
}

export type MeanFieldAnswer =
  | { ok: true; times: number[]; observables: { id: string; values: number[] }[] }
  /** Why there is no curve, in a sentence. */
  | { ok: false; message: string };
