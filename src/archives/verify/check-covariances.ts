/** Re-adds the sums of products of an archive's blocks: against covariances.csv. */
import { gridTimes } from '@/domain/jobs/result-outputs.ts';
import { addCrossSums, noCrossSums, type CrossSums } from '@/engine/statistics/cross-cells.ts';
import { crossMomentsOf } from '@/engine/statistics/cross-moments.ts';
import { cellText, table, type Checking, type ListedBlock, type ReAdded } from './check-sums.ts';
import { TableError } from './read-table.ts';

/** Of each block, pair by pair and then by grid time. */
export type BlockCrossSums = CrossSums[][];

/** The columns that name a row's place, in the order of both tables. */
const placesOf = ({ shape, job }: Checking): string[] => {
  const times = gridTimes(job.horizon, job.gridIntervals);
  const { observables, pairs = [] } = shape;
  return pairs.flatMap(([first, second]) =>
    times.map((time) => [observables[first]!.id, observables[second]!.id, cellText(time)].join(',')),
  );
};

/** block-cross-sums.csv; empty for a job without correlations. */
export async function blockCrossSums(checking: Checking, blocks: ListedBlock[]): Promise<BlockCrossSums> {
  if (!checking.job.correlations) return [];
  const places = placesOf(checking);
  const all: BlockCrossSums = blocks.map(() => []);
  let row = 0;
  for await (const [point, first, id, other, time, ...texts] of table(checking, 'block-cross-sums')) {
    const block = blocks[Math.floor(row / places.length)];
    const due = [block?.point, block?.firstReplicate, places[row % places.length]].join(',');
    if (!block || [point, first, id, other, time].join(',') !== due)
      throw new TableError(`results/block-cross-sums.csv: row ${row + 1} should be that of ${due}.`);
    if (!texts.every((text) => /^\d{1,200}$/.test(text)))
      throw new TableError(`results/block-cross-sums.csv: a sum of ${due} is no whole number.`);
    all[Math.floor(row / places.length)]!.push(texts.map(BigInt) as CrossSums);
    row++;
  }
  if (row !== blocks.length * places.length)
    throw new TableError(`results/block-cross-sums.csv has ${row} rows, not ${blocks.length * places.length}.`);
  return all;
}

/** covariances.csv: every number, from the sums. Answers how many were compared. */
export async function checkCovariances(
  checking: Checking,
  blocks: ListedBlock[],
  { reAdded, crossSums }: { reAdded: ReAdded; crossSums: BlockCrossSums },
): Promise<number> {
  const { job, shape, problem } = checking;
  if (!job.correlations) return 0;
  const { pairs = [], gridPoints } = shape;
  const places = placesOf(checking);
  const totals = Array.from({ length: job.points * places.length }, noCrossSums);
  for (const [block, sums] of crossSums.entries())
    for (const [place, sum] of sums.entries()) addCrossSums(totals[blocks[block]!.point * places.length + place]!, sum);
  let row = 0;
  for await (const [number, id, other, time, ...values] of table(checking, 'covariances')) {
    const point = Math.floor(row / places.length);
    const place = row % places.length;
    if (row >= totals.length || [number, id, other, time].join(',') !== [point, places[place]].join(','))
      throw new TableError(`results/covariances.csv: row ${row + 1} is not of its place.`);
    const sumsOf = (observable: number) =>
      reAdded.totals[(point * shape.observables.length + observable) * gridPoints + (place % gridPoints)]!;
    const [first, second] = pairs[Math.floor(place / gridPoints)]!;
    const moments = crossMomentsOf(job.replicates, sumsOf(first), sumsOf(second), totals[row]!);
    const expected = [
      moments.covariance,
      moments.covarianceStandardError,
      moments.correlation,
      moments.correlationStandardError,
    ];
    for (const [i, value] of expected.entries())
      if (values[i] !== cellText(value))
        problem(
          `results/covariances.csv: of ${id} and ${other} at ${time} it has ${values[i]}, the blocks give ${cellText(value)}.`,
        );
    row++;
  }
  if (row !== totals.length) throw new TableError(`results/covariances.csv has ${row} rows, not ${totals.length}.`);
  return 4 * row;
}
