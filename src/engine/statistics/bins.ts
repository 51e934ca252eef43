/**
 * The bins of a histogram of counts: one bin per count up to 4095, then bins of width 2, 4, 8, … such that a bin is never wider
 * than 1/2048 of its least count.
 */

/** Counts below this have a bin of their own. */
export const exactBelow = 4096;
const exactBits = 12;
const half = exactBelow / 2;

/** The bin of a count in [0, 2^31). */
export function binOf(count: number): number {
  if (count < exactBelow) return count;
  const shift = 32 - Math.clz32(count) - exactBits;
  return exactBelow + (shift - 1) * half + (count >>> shift) - half;
}

/** The least count of a bin and how many counts it holds. */
export function binRange(bin: number): { least: number; width: number } {
  if (bin < exactBelow) return { least: bin, width: 1 };
  const shift = Math.floor((bin - exactBelow) / half) + 1;
  const width = 2 ** shift;
  return { least: (((bin - exactBelow) % half) + half) * width, width };
}

/** The count that stands for a bin where one number is wanted: its middle, rounded down. */
export function binMiddle(bin: number): number {
  const { least, width } = binRange(bin);
  return least + Math.floor((width - 1) / 2);
}
