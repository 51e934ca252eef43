/** From the points of a sweep to what is drawn: curves along one quantity, or a map over two. */
import type { SweepCurve, SweepMap, SweepValue } from '@/charts/sweep-option.ts';
import type { Sweep } from '@/domain/jobs/sweep.ts';

export interface SweepChoice {
  sweep: Sweep;
  /** By point. */
  found: readonly (SweepValue | null)[];
  /** Places of targets. `across` is null where points lie anywhere. */
  along: number;
  across: number | null;
  /** Targets beyond two, each at one of its values. */
  held: { target: number; value: number }[];
}

/** More curves are not told apart. */
const curvesMost = 6;

/** The values that a target takes, upwards. */
export const axisValues = ({ values }: Sweep, target: number): number[] =>
  [...new Set(values.map((row) => row[target]!))].sort((a, b) => a - b);

function chosenPoints({ sweep, found, held }: SweepChoice) {
  return sweep.values.flatMap((row, point) =>
    held.every(({ target, value }) => row[target] === value) ? [{ row, cell: found[point] ?? null }] : [],
  );
}

/** One curve, or one for each value of `across`: of more than six values the first, the last and four spread between. */
export function curvesAlong(choice: SweepChoice, names: string[]): SweepCurve[] {
  const { along, across, sweep } = choice;
  const points = chosenPoints(choice);
  const curve = (name: string, holds: (row: number[]) => boolean): SweepCurve => ({
    name,
    points: points
      .flatMap(({ row, cell }) => (cell && holds(row) ? [{ x: row[along]!, ...cell }] : []))
      .sort((a, b) => a.x - b.x),
  });
  if (across === null) return [curve('', () => true)];
  const values = axisValues(sweep, across);
  const spread = Array.from(
    { length: Math.min(curvesMost, values.length) },
    (_, i, of = Math.min(curvesMost, values.length)) =>
      of === 1 ? values[0]! : values[Math.round((i * (values.length - 1)) / (of - 1))]!,
  );
  return spread.map((value) =>
    curve(`${names[across]} ${Number(value.toPrecision(4))}`, (row) => row[across] === value),
  );
}

export function mapOf(choice: SweepChoice, names: string[]): Pick<SweepMap, 'x' | 'y' | 'cells'> {
  const { sweep, along } = choice;
  const across = choice.across ?? 0;
  const [xs, ys] = [axisValues(sweep, along), axisValues(sweep, across)];
  const points = chosenPoints(choice);
  const cells = ys.map((y) =>
    xs.map((x) => points.find(({ row }) => row[along] === x && row[across] === y)?.cell ?? null),
  );
  return { x: { title: names[along]!, values: xs }, y: { title: names[across]!, values: ys }, cells };
}
