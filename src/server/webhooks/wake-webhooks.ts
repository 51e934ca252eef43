/** Tells the running webhooks part that a delivery waits; without one (tests, commands) it does nothing. */
const house = globalThis as typeof globalThis & { buretteWakeWebhooks?: () => void };

export const wakeWebhooks = (): void => house.buretteWakeWebhooks?.();

/** The webhooks part registers itself here while it runs. */
export function onWebhookQueued(wake: (() => void) | null): void {
  if (wake) house.buretteWakeWebhooks = wake;
  else delete house.buretteWakeWebhooks;
}
