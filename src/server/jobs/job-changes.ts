/** Tells those who watch jobs that something changed: progress streams each job, the dispatcher its wake-up calls. */
import { EventEmitter } from 'node:events';

const house = globalThis as typeof globalThis & { buretteJobChanges?: EventEmitter };
const changes = (house.buretteJobChanges ??= new EventEmitter().setMaxListeners(0));

export const announceJobChange = (jobId: string): void => void changes.emit(`changed ${jobId}`);

/** Calls `listener` after each change of the job; returns what stops it. */
export function onJobChange(jobId: string, listener: () => void): () => void {
  changes.on(`changed ${jobId}`, listener);
  return () => changes.off(`changed ${jobId}`, listener);
}

/** A job was launched, extended or cancelled: the dispatcher looks at it anew. */
export const wakeDispatcher = (jobId: string): void => void changes.emit('wake', jobId);

export function onWake(listener: (jobId: string) => void): () => void {
  changes.on('wake', listener);
  return () => changes.off('wake', listener);
}
