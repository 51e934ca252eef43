/** Disputes: which credits a disputed amount covers, and what is owed when it is lost. */

/** Credits that the disputed part of a payment bought, rounded up. A whole payment covers its whole lot. */
export function coveredBy(options: {
  creditsMicrocredits: number;
  /** Minor units, tax included. */
  disputedMinor: number;
  paidMinor: number;
}): number {
  const { creditsMicrocredits, disputedMinor, paidMinor } = options;
  const [credits, disputed, paid] = [BigInt(creditsMicrocredits), BigInt(disputedMinor), BigInt(paidMinor)];
  return disputed >= paid ? creditsMicrocredits : Number((credits * disputed + paid - 1n) / paid);
}

/**
 * What is owed for credits that the dispute covers and that could not be taken back: what the bank took, less what
 * credit notes gave. When all were taken, nothing: a minor unit that rounding leaves is ours.
 */
export const owedAfter = (options: {
  disputedMinor: number;
  creditedMinor: number;
  coveredMicrocredits: number;
  takenMicrocredits: number;
}): number =>
  options.takenMicrocredits >= options.coveredMicrocredits
    ? 0
    : Math.max(0, options.disputedMinor - options.creditedMinor);
