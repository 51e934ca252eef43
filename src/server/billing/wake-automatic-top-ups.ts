/** Says that a ledger has changed, so that an automatic top-up begins at once instead of at the next round. */
const house = globalThis as typeof globalThis & { buretteLedgerListener?: () => void };

export const wakeAutomaticTopUps = (): void => house.buretteLedgerListener?.();

/** The billing part listens while it runs. */
export function onLedgerChanged(listener: (() => void) | null): void {
  if (listener) house.buretteLedgerListener = listener;
  else delete house.buretteLedgerListener;
}
