/** A sweep: one job over several points, each with values of its own in place of the model's and the scenario's. */
import type { Overrides } from '../network/document.ts';

/** What a point sets. `change_time`: when a timed change first happens. */
export interface SweepTarget {
  kind: 'parameter' | 'initial_count' | 'change_time';
  id: string;
}

/** Worked out once, when the job is quoted, and stored: nothing later computes a point again. */
export interface Sweep {
  kind: 'grid' | 'list' | 'latin_hypercube';
  targets: SweepTarget[];
  /** values[point][target] */
  values: number[][];
}

const fields = {
  parameter: 'parameters',
  initial_count: 'initialCounts',
  change_time: 'changeTimes',
} as const satisfies Record<SweepTarget['kind'], keyof Overrides>;

/** Where the value of a target stands among overrides, as paths of faults have it. */
export const overridePath = ({ kind, id }: SweepTarget): string => `overrides.${fields[kind]}.${id}`;

/** The overrides of a job's point: the scenario's, and over them what the point sets. A job without a sweep has point 0. */
export function overridesAt(inputs: { overrides: Overrides; sweep?: Sweep | undefined }, point: number): Overrides {
  const { overrides, sweep } = inputs;
  if (!sweep) return overrides;
  const merged: Overrides = { ...overrides };
  for (const [place, { kind, id }] of sweep.targets.entries()) {
    const field = fields[kind];
    merged[field] = { ...merged[field], [id]: sweep.values[point]![place]! };
  }
  return merged;
}

export const pointsOf = ({ sweep }: { sweep?: Sweep | undefined }): number => sweep?.values.length ?? 1;

/** One word for a column: `k1`, `initial_count:A`, `change_time:dose`. */
export const targetName = ({ kind, id }: SweepTarget): string => (kind === 'parameter' ? id : `${kind}:${id}`);

/** "k1 = 0.5, A = 20 at the start": a point in words. */
export function pointWords({ targets, values }: Sweep, point: number): string {
  const words = {
    parameter: (id: string, value: number) => `${id} = ${value}`,
    initial_count: (id: string, value: number) => `${id} = ${value} at the start`,
    change_time: (id: string, value: number) => `${id} at time ${value}`,
  };
  return targets.map(({ kind, id }, place) => words[kind](id, values[point]![place]!)).join(', ');
}
