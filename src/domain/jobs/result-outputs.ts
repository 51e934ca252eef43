/** Which of an ensemble's numbers go into its archive: fixed functions of the job's inputs, so that results repeat. */

/** Histograms are written at no more grid times than this. */
const histogramTimesMost = 201;

/** Indices of the grid times whose histograms are written: all up to 201 of them, else evenly spaced ones with both ends. */
export function histogramTimes(gridIntervals: number): number[] {
  if (gridIntervals < histogramTimesMost) return Array.from({ length: gridIntervals + 1 }, (_, index) => index);
  const last = histogramTimesMost - 1;
  return Array.from({ length: histogramTimesMost }, (_, index) => Math.floor((index * gridIntervals) / last));
}

/** Grid time i is i · horizon / gridIntervals. */
export const gridTimes = (horizon: number, gridIntervals: number): number[] =>
  Array.from({ length: gridIntervals + 1 }, (_, index) => (index * horizon) / gridIntervals);
