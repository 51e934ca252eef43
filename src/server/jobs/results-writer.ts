/** Where the results of a job whose end is settled are written: beside the requests, so that pages stay quick. */
import { Piscina } from 'piscina';
import type { WriteResultsAnswer, WriteResultsTask } from '@/archives/write-results.ts';

export interface ResultsWriter {
  /** Writes the files that the task names. Writing again after a crash gives the same bytes. Rejects when closed. */
  write(task: WriteResultsTask): Promise<WriteResultsAnswer>;
  /** Ends all work. */
  close(): Promise<void>;
}

const house = globalThis as typeof globalThis & { buretteResultsWriter?: ResultsWriter };

/** The writer of this process; throws before jobs have started. */
export function resultsWriter(): ResultsWriter {
  if (!house.buretteResultsWriter) throw new Error('No results writer is running.');
  return house.buretteResultsWriter;
}

/** Set by the jobs part; tests set their own. */
export function setResultsWriter(value: ResultsWriter | null): void {
  if (value) house.buretteResultsWriter = value;
  else delete house.buretteResultsWriter;
}

/** One thread, warm from the start: jobs that end together wait for each other, not for batches. */
export function startResultsWriter(options: { workerFile: string }): ResultsWriter {
  const pool = new Piscina({
    filename: options.workerFile,
    minThreads: 1,
    maxThreads: 1,
    niceIncrement: 10,
    idleTimeout: Infinity,
    closeTimeout: 5_000,
  });
  return {
    write: (task) => pool.run(task) as Promise<WriteResultsAnswer>,
    close: () => pool.destroy(),
  };
}
