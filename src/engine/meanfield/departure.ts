/** How far an ensemble mean lies from the mean field: in counts, as a part of it, and in units of its standard error. */

export interface Departure {
  /** Mean less mean field at each grid time, in the observable's unit. */
  difference: number[];
  /** difference / |mean field|; null where the mean field is 0 and the difference is not. */
  relative: (number | null)[];
  /**
   * difference / standard error; null where the standard error is 0 and the difference is not. With n replicates the
   * standard error falls as 1/√n while the difference stays, so this grows as √n wherever the two truly differ: a large
   * value says that the difference is certain, not that it is large.
   */
  inStandardErrors: (number | null)[];
  /** The grid indices where each is farthest from 0; null for an empty grid or when nothing is defined. */
  farthest: { difference: number | null; relative: number | null; inStandardErrors: number | null };
}

/**
 * Departure of one observable, all three arrays on the same grid. The mean field is the limit of large counts (Kurtz 1972,
 * J. Chem. Phys. 57:2976; citation from memory), so a departure is a property of the network at its size, not a fault of
 * either calculation. Its own numerical error (relative about 1e−6) is not part of the standard error.
 * Throws RangeError when lengths differ.
 */
export function departureFromMeanField(options: {
  mean: ArrayLike<number>;
  meanStandardError: ArrayLike<number>;
  meanField: ArrayLike<number>;
}): Departure {
  const { mean, meanStandardError, meanField } = options;
  if (mean.length !== meanField.length || mean.length !== meanStandardError.length) {
    throw new RangeError(`lengths differ: ${mean.length}, ${meanStandardError.length}, ${meanField.length}`);
  }
  const difference = Array.from(meanField, (value, index) => mean[index]! - value);
  const relative = difference.map((value, index) => quotient(value, Math.abs(meanField[index]!)));
  const inStandardErrors = difference.map((value, index) => quotient(value, meanStandardError[index]!));
  return {
    difference,
    relative,
    inStandardErrors,
    farthest: {
      difference: indexOfFarthest(difference),
      relative: indexOfFarthest(relative),
      inStandardErrors: indexOfFarthest(inStandardErrors),
    },
  };
}

/** 0/0 counts as 0: no departure. */
function quotient(difference: number, unit: number): number | null {
  if (difference === 0) return 0;
  const result = difference / unit;
  return Number.isFinite(result) ? result : null;
}

function indexOfFarthest(values: (number | null)[]): number | null {
  let farthest: number | null = null;
  values.forEach((value, index) => {
    if (value === null || Number.isNaN(value)) return;
    if (farthest === null || Math.abs(value) > Math.abs(values[farthest]!)) farthest = index;
  });
  return farthest;
}
