/** Stopping by precision: when the mean of an observable is known well enough. Pure decisions from numbers. */

export interface PrecisionTarget {
  kind: 'precision';
  observable: string;
  /** Index of the grid time. */
  gridPoint: number;
  /** Half the width of the 95 % interval wished for: as a part of the mean, or in the observable's own unit. */
  halfWidth: { relative: number } | { absolute: number };
}

/** The first prefix that is looked at; each later one is twice as long. */
export const firstLook = 256;
/** With fewer replicates off the commonest value, a spread is not trusted. */
const uncommonLeast = 30;
const normal95 = 1.959963984540054;

/** Prefixes of 256, 512, 1024 … replicates are looked at, never others, so that results do not depend on batches. */
export function isLook(replicates: number): boolean {
  const ratio = replicates / firstLook;
  return ratio >= 1 && Number.isInteger(Math.log2(ratio));
}

/** The looks after `from` and up to `to` replicates: batches end at them. */
export function looksBetween(from: number, to: number): number[] {
  const looks: number[] = [];
  for (let look = firstLook; look <= to; look *= 2) if (look > from) looks.push(look);
  return looks;
}

export interface SeenSoFar {
  replicates: number;
  mean: number;
  /** NaN below two replicates. */
  standardError: number;
  /** How often the commonest value occurred. */
  commonest: number;
}

/**
 * Whether the target is met. A spread of 0, or fewer than 30 replicates off the commonest value, never meets it: rare
 * outcomes that have not shown themselves look like certainty. The interval is nominal, since it is looked at repeatedly.
 */
export function isPrecise({ halfWidth }: PrecisionTarget, seen: SeenSoFar): boolean {
  const { replicates, mean, standardError, commonest } = seen;
  if (!(standardError > 0) || replicates - commonest < uncommonLeast) return false;
  const wished = 'relative' in halfWidth ? halfWidth.relative * Math.abs(mean) : halfWidth.absolute;
  return normal95 * standardError <= wished;
}
