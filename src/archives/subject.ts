/** What an archive is about, as plain data: the server takes it from its rows, a worker thread gets it as a message. */
import type { JobEnding, JobInputs } from '@/domain/jobs/job-inputs.ts';
import type { NetworkDocument } from '@/domain/network/document.ts';
import type { Ensemble } from './ensemble.ts';
import type { BlockShare } from '@/engine/statistics/blocks.ts';

export interface ArchiveSubject {
  job: {
    name: string;
    seed: string;
    inputs: JobInputs;
    ending: JobEnding | null;
    events: number;
    replicatesPlanned: number;
  };
  model: { name: string };
  version: { number: number; contentHash: string; document: NetworkDocument };
  revision: number;
  /** RFC 3339; the date that stands on the report. */
  finishedAt: string;
}

/** What was computed. */
export interface Results {
  ensemble: Ensemble;
  /** By point. */
  blocks: BlockShare[];
}
