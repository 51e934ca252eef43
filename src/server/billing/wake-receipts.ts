/** Lets whoever pays get the receipt at once instead of at the next round of the billing part. */
const house = globalThis as typeof globalThis & { buretteReceiptsListener?: () => void };

export const wakeReceipts = (): void => house.buretteReceiptsListener?.();

/** The billing part listens while it runs. */
export function onReceipts(listener: (() => void) | null): void {
  if (listener) house.buretteReceiptsListener = listener;
  else delete house.buretteReceiptsListener;
}
