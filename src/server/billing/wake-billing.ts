/** Lets what a commit has made due (a receipt, a top-up, a card to forget) happen at once instead of at the next round. */
const house = globalThis as typeof globalThis & { buretteBillingListener?: () => void };

export const wakeBilling = (): void => house.buretteBillingListener?.();

/** The billing part listens while it runs. */
export function onBillingWoken(listener: (() => void) | null): void {
  if (listener) house.buretteBillingListener = listener;
  else delete house.buretteBillingListener;
}
