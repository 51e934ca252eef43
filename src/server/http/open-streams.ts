/** Keeps track of open server-sent event streams so that shutdown can end them. */
const house = globalThis as typeof globalThis & { buretteStreams?: Set<() => void> };
const streams = (house.buretteStreams ??= new Set());

/** Registers a function that ends a stream; returns one that forgets it. */
export function registerStream(close: () => void): () => void {
  streams.add(close);
  return () => streams.delete(close);
}

export function closeOpenStreams(): void {
  for (const close of [...streams]) close();
  streams.clear();
}
