/** From what somebody asks of a sweep to its points. */
import { limits } from '../limits.ts';
import type { InputFault } from '../refusals.ts';
import type { Sweep, SweepTarget } from './sweep.ts';

/** `count` values from `from` to `to`, both included; `log`: equal ratios instead of equal steps. */
export interface Spacing {
  from: number;
  to: number;
  count: number;
  scale: 'linear' | 'log';
}

export type SweepRequest =
  /** Every combination; the last axis varies fastest. */
  | { kind: 'grid'; axes: ({ target: SweepTarget } & ({ values: number[] } | { spacing: Spacing }))[] }
  /** Combinations one by one: values[point][target]. */
  | { kind: 'list'; targets: SweepTarget[]; values: number[][] }
  /** `count` points such that each axis, cut into `count` equal parts, has one point in every part. */
  | {
      kind: 'latin_hypercube';
      axes: { target: SweepTarget; from: number; to: number; scale: 'linear' | 'log' }[];
      count: number;
    };

export type PlannedSweep = { ok: true; sweep: Sweep } | { ok: false; faults: InputFault[] };

/**
 * `uniform` answers numbers in [0, 1) of a stream that the caller fixes; only a Latin hypercube (McKay, Beckman & Conover 1979,
 * from memory) draws any. Spaced counts are rounded to whole ones; values given one by one are not.
 */
export function planSweep(request: SweepRequest, uniform: () => number): PlannedSweep {
  const targets = request.kind === 'list' ? request.targets : request.axes.map(({ target }) => target);
  const faults = [...repeatedTargets(targets), ...faultsOf(request)];
  if (faults.length > 0) return { ok: false, faults };
  const values =
    request.kind === 'list'
      ? request.values
      : request.kind === 'grid'
        ? combinations(request.axes.map((axis) => axisValues(axis)))
        : latinHypercube(request.axes, request.count, uniform);
  const repeated = repeatedPoint(values);
  return repeated ? { ok: false, faults: [repeated] } : { ok: true, sweep: { kind: request.kind, targets, values } };
}

function faultsOf(request: SweepRequest): InputFault[] {
  switch (request.kind) {
    case 'grid': {
      const counts = request.axes.map((axis) => ('values' in axis ? axis.values.length : axis.spacing.count));
      const faults = request.axes.flatMap((axis, place) =>
        'spacing' in axis ? rangeFaults(axis.spacing, `sweep.axes[${place}].spacing`) : [],
      );
      return [...faults, ...numberFaults(counts.reduce((product, count) => product * count, 1))];
    }
    case 'list': {
      const ragged = request.values.findIndex((values) => values.length !== request.targets.length);
      const faults = numberFaults(request.values.length);
      return ragged < 0
        ? faults
        : [...faults, fault(`sweep.values[${ragged}]`, 'ragged', `A point sets ${request.targets.length} values.`)];
    }
    case 'latin_hypercube':
      return [
        ...request.axes.flatMap((axis, place) => rangeFaults(axis, `sweep.axes[${place}]`)),
        ...numberFaults(request.count),
      ];
  }
}

const fault = (path: string, code: string, message: string): InputFault => ({ path, code, message });

function rangeFaults({ from, to, scale }: { from: number; to: number; scale: string }, path: string): InputFault[] {
  if (!(from < to)) return [fault(`${path}.to`, 'empty_range', 'A range ends above where it begins.')];
  if (scale === 'log' && from <= 0)
    return [fault(`${path}.from`, 'not_positive', 'A logarithmic range begins above 0.')];
  return [];
}

function numberFaults(points: number): InputFault[] {
  if (points === 0) return [fault('sweep', 'no_points', 'A sweep has at least one point.')];
  return points > limits.sweepPoints
    ? [
        fault(
          'sweep',
          'too_many_points',
          `${points.toLocaleString('en')} points; at most ${limits.sweepPoints.toLocaleString('en')}.`,
        ),
      ]
    : [];
}

function repeatedTargets(targets: SweepTarget[]): InputFault[] {
  const seen = new Set<string>();
  const again = targets.find(({ kind, id }) => seen.size === seen.add(`${kind} ${id}`).size);
  return again ? [fault('sweep', 'repeated_target', `${again.id} is varied twice.`)] : [];
}

function repeatedPoint(values: number[][]): InputFault | null {
  const seen = new Map<string, number>();
  for (const [point, row] of values.entries()) {
    const earlier = seen.get(row.join(' '));
    if (earlier !== undefined)
      return fault('sweep', 'repeated_point', `Points ${earlier} and ${point} are the same: ${row.join(', ')}.`);
    seen.set(row.join(' '), point);
  }
  return null;
}

type GridAxis = Extract<SweepRequest, { kind: 'grid' }>['axes'][number];

function axisValues(axis: GridAxis): number[] {
  if ('values' in axis) return axis.values;
  const { from, to, count, scale } = axis.spacing;
  return Array.from({ length: count }, (_, i) =>
    placed(axis.target, i === 0 ? from : i === count - 1 ? to : between(from, to, scale, i / (count - 1))),
  );
}

const between = (from: number, to: number, scale: 'linear' | 'log', part: number): number =>
  scale === 'linear' ? from + (to - from) * part : from * (to / from) ** part;

/** Counts are whole. */
const placed = ({ kind }: SweepTarget, value: number): number => (kind === 'initial_count' ? Math.round(value) : value);

const combinations = (axes: number[][]): number[][] =>
  axes.reduce<number[][]>(
    (points, values) => points.flatMap((point) => values.map((value) => [...point, value])),
    [[]],
  );

function latinHypercube(
  axes: Extract<SweepRequest, { kind: 'latin_hypercube' }>['axes'],
  count: number,
  uniform: () => number,
): number[][] {
  const columns = axes.map(({ target, from, to, scale }) =>
    shuffled(count, uniform).map((part) => placed(target, between(from, to, scale, (part + uniform()) / count))),
  );
  return Array.from({ length: count }, (_, point) => columns.map((column) => column[point]!));
}

/** 0 … count − 1 in random order (Fisher & Yates). */
function shuffled(count: number, uniform: () => number): number[] {
  const order = Array.from({ length: count }, (_, i) => i);
  for (let last = count - 1; last > 0; last--) {
    const other = Math.floor(uniform() * (last + 1));
    [order[last], order[other]] = [order[other]!, order[last]!];
  }
  return order;
}
