/** Which batches of a job are being computed now, as this process's dispatcher knows. */
interface Watch {
  batchesOut(jobId: string): ReadonlySet<string>;
}

const house = globalThis as typeof globalThis & { buretteDispatcher?: Watch };

export const batchesOut = (jobId: string): ReadonlySet<string> =>
  house.buretteDispatcher?.batchesOut(jobId) ?? new Set<string>();

/** Set by the jobs part. */
export function setDispatcherWatch(watch: Watch | null): void {
  if (watch) house.buretteDispatcher = watch;
  else delete house.buretteDispatcher;
}
