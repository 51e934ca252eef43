/** Lots: each issue of credits, what is drawn from it and in which order, and the money it earned. */

export type LotSource = 'grant' | 'royalty' | 'bought';

/** A lot as it is issued with a transaction. */
export interface LotIssue {
  id: string;
  teamId: string;
  source: LotSource;
  creditsMicrocredits: number;
  /** Net money paid, minor units; 0 for grants. */
  netMinor: number;
  /** ISO 4217; null for grants. */
  currency: string | null;
  /** The top-up or pro-forma that paid for it. */
  purchaseId: string | null;
}

export interface OpenLot {
  id: string;
  source: LotSource;
  remainingMicrocredits: number;
  /** The part of what remains that a dispute has frozen: it cannot be drawn until the dispute is decided. */
  frozenMicrocredits: number;
  /** Order of issue. */
  sequence: number;
}

/** What a transaction does to a lot: takes from it, freezes a part of it, or sets it free. */
export interface LotDraw {
  lotId: string;
  teamId: string;
  /** Taken out; never negative. */
  amountMicrocredits: number;
  /** What the lot has left after it. */
  remainingMicrocredits: number;
  frozenChangeMicrocredits: number;
  /** What of the rest is frozen after it. */
  frozenMicrocredits: number;
}

type LotState = Pick<OpenLot, 'id' | 'remainingMicrocredits' | 'frozenMicrocredits'>;

/** One movement of one lot. Throws when the lot cannot give or freeze that much. */
export function moveLot(
  teamId: string,
  lot: LotState,
  change: { takenMicrocredits?: number; frozenMicrocredits?: number },
): LotDraw {
  const { takenMicrocredits = 0, frozenMicrocredits: frozenChange = 0 } = change;
  const remaining = lot.remainingMicrocredits - takenMicrocredits;
  const frozen = lot.frozenMicrocredits + frozenChange;
  if (takenMicrocredits < 0 || frozen < 0 || frozen > remaining)
    throw new Error(`Lot ${lot.id} cannot give ${takenMicrocredits} and have ${frozen} of ${remaining} frozen.`);
  return {
    lotId: lot.id,
    teamId,
    amountMicrocredits: takenMicrocredits,
    remainingMicrocredits: remaining,
    frozenChangeMicrocredits: frozenChange,
    frozenMicrocredits: frozen,
  };
}

/** Grants are used first, so that paid credits, which alone can be refunded, last longest. */
const drawOrder: Record<LotSource, number> = { grant: 0, royalty: 1, bought: 2 };

/**
 * Draws `amountMicrocredits` from lots: grants, then royalties, then bought ones, oldest first;
 * frozen credits stay. Throws when the lots hold less, which would mean that the ledger's invariant is broken.
 */
export function drawFromLots(teamId: string, lots: readonly OpenLot[], amountMicrocredits: number): LotDraw[] {
  const ordered = [...lots].sort((a, b) => drawOrder[a.source] - drawOrder[b.source] || a.sequence - b.sequence);
  const draws: LotDraw[] = [];
  let left = amountMicrocredits;
  for (const lot of ordered) {
    if (left === 0) break;
    const amount = Math.min(left, lot.remainingMicrocredits - lot.frozenMicrocredits);
    if (amount === 0) continue;
    draws.push(moveLot(teamId, lot, { takenMicrocredits: amount }));
    left -= amount;
  }
  if (left > 0) throw new Error(`The lots of ${teamId} hold ${left} microcredits less than its accounts.`);
  return draws;
}

/**
 * Money that belongs to the drawn part of a lot, in minor units: floor(netMinor × drawn / credits), cumulative.
 * Differences of this running figure add up to netMinor exactly, however the draws are split.
 */
export function moneyOfDrawn(options: {
  netMinor: number;
  creditsMicrocredits: number;
  drawnMicrocredits: number;
}): number {
  const { netMinor, creditsMicrocredits, drawnMicrocredits } = options;
  return Number((BigInt(netMinor) * BigInt(drawnMicrocredits)) / BigInt(creditsMicrocredits));
}
