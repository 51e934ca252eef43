/** The scale of a graduated column: round divisions that leave a little empty glass above the liquid. */
import { microcreditsPerCredit } from '@/domain/pricing/price-book.ts';

export interface ColumnScale {
  topMicrocredits: number;
  /** Labelled divisions. */
  majorMicrocredits: number;
  /** Small divisions between two labelled ones. */
  minorsPerMajor: number;
}

const room = 1.1;
const majorsWanted = 6;

/** Divisions of 1, 2 or 5 times a power of ten, at most six of them labelled; an empty column shows ten credits. */
export function columnScale(levelMicrocredits: number): ColumnScale {
  const least = Math.max(levelMicrocredits, 0) * room || 10 * microcreditsPerCredit;
  const step = least / majorsWanted;
  const power = 10 ** Math.floor(Math.log10(step));
  const major = Math.max(1, Math.round(([1, 2, 5, 10].find((factor) => factor * power >= step) ?? 10) * power));
  return { topMicrocredits: Math.ceil(least / major) * major, majorMicrocredits: major, minorsPerMajor: 10 };
}

/** Share of the scale below a value, clamped to 0 … 1. */
export const heightOnScale = (microcredits: number, scale: ColumnScale): number =>
  Math.min(1, Math.max(0, microcredits / scale.topMicrocredits));
