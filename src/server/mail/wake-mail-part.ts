/** Tells the running mail part that the outbox holds something new; without one (tests, commands) it does nothing. */
const house = globalThis as typeof globalThis & { buretteWakeMail?: () => void };

export const wakeMailPart = (): void => house.buretteWakeMail?.();

/** The mail part registers itself here while it runs. */
export function onMailQueued(wake: (() => void) | null): void {
  if (wake) house.buretteWakeMail = wake;
  else delete house.buretteWakeMail;
}
