/** The clock of the services. Tests set it; nothing below server/ reads one. */
const house = globalThis as typeof globalThis & { buretteClock?: () => number };

/** Milliseconds since the epoch. */
export const nowMs = (): number => (house.buretteClock ?? Date.now)();

/** RFC 3339 UTC with milliseconds, as stored. `offsetMs` shifts it. */
export const nowText = (offsetMs = 0): string => new Date(nowMs() + offsetMs).toISOString();

/** Tests only: null gives the real clock back. */
export function setClock(clock: (() => number) | null): void {
  if (clock) house.buretteClock = clock;
  else delete house.buretteClock;
}
