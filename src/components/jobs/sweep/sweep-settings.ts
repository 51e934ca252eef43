/** What the sweep builder holds as text, and the sweep that it means or what is wrong, field by field. */
import type { z } from 'zod';
import type { JobDocument, quoteRequest } from '@/contracts/jobs.ts';
import { planSweep, type SweepRequest } from '@/domain/jobs/plan-sweep.ts';
import { targetName, type Sweep, type SweepTarget } from '@/domain/jobs/sweep.ts';
import type { NetworkDocument } from '@/domain/network/document.ts';
import { splitMix64 } from '@/engine/random/splitmix64.ts';
import { uniform53, Xoshiro256 } from '@/engine/random/xoshiro256.ts';

export interface AxisSettings {
  /** A target's name, as in `targetsOf`. */
  target: string;
  spacing: 'values' | 'linear' | 'log';
  /** With commas or spaces between them. */
  values: string;
  from: string;
  to: string;
  count: string;
}

export interface SweepSettings {
  kind: 'none' | Sweep['kind'];
  axes: AxisSettings[];
  /** Of a Latin hypercube. */
  count: string;
  seed: string;
  /** Of a list: a first line of names, then a line a point. */
  list: string;
}

export const noSweep: SweepSettings = { kind: 'none', axes: [], count: '20', seed: '1', list: '' };

export const firstAxis = (target: string): AxisSettings => ({
  target,
  spacing: 'values',
  values: '',
  from: '',
  to: '',
  count: '5',
});

export interface TargetChoice {
  name: string;
  label: string;
  target: SweepTarget;
}

/** Everything that a point can set, in the model's order. */
export function targetsOf({
  parameters,
  compartments,
  species,
  changes,
  assignmentRules,
}: NetworkDocument): TargetChoice[] {
  const ruled = new Set((assignmentRules ?? []).map(({ variable }) => variable));
  const choice = (kind: SweepTarget['kind'], id: string, label: string): TargetChoice => {
    const target = { kind, id };
    return { name: targetName(target), label, target };
  };
  const named = (id: string, name: string | undefined) => (name ? `${name} (${id})` : id);
  return [
    ...(parameters ?? [])
      .filter(({ id }) => !ruled.has(id))
      .map(({ id, name }) => choice('parameter', id, named(id, name))),
    ...(compartments ?? [])
      .filter(({ size }) => size !== null)
      .map(({ id }) => choice('parameter', id, `size of ${id}`)),
    ...species
      .filter(({ id }) => !ruled.has(id))
      .map(({ id, name }) => choice('initial_count', id, `${named(id, name)} at the start`)),
    ...(changes ?? [])
      .filter(({ when }) => when.kind === 'time')
      .map(({ id, name }) => choice('change_time', id, `time of ${named(id, name)}`)),
  ];
}

export type SweepRequestBody = NonNullable<z.input<typeof quoteRequest>['sweep']>;
export type ReadSweep =
  | { ok: true; request: SweepRequestBody | undefined; sweep: Sweep | undefined }
  | { ok: false; faults: Record<string, string> };

const numbersIn = (text: string): number[] =>
  text
    .split(/[\s,;]+/)
    .filter(Boolean)
    .map(Number);

/** Faults under `sweep`, `sweep.axes[0].values` and so on. */
export function readSweepSettings(settings: SweepSettings, network: NetworkDocument): ReadSweep {
  if (settings.kind === 'none') return { ok: true, request: undefined, sweep: undefined };
  const faults: Record<string, string> = {};
  const known = new Map(targetsOf(network).map(({ name, target }) => [name, target]));
  const request = requestOf(settings, known, faults);
  if (Object.keys(faults).length > 0) return { ok: false, faults };
  const seed = request.kind === 'latin_hypercube' ? BigInt(request.seed) : 0n;
  const stream = new Xoshiro256(splitMix64(seed, 4));
  const planned = planSweep(request, () => uniform53(stream.next()));
  if (planned.ok) return { ok: true, request, sweep: planned.sweep };
  for (const { path, message } of planned.faults) faults[path.replace('.spacing', '')] ??= message;
  return { ok: false, faults };
}

type Request =
  | Exclude<SweepRequest, { kind: 'latin_hypercube' }>
  | (Extract<SweepRequest, { kind: 'latin_hypercube' }> & { seed: string });

function requestOf(settings: SweepSettings, known: Map<string, SweepTarget>, faults: Record<string, string>): Request {
  if (settings.kind === 'list') return listOf(settings.list, known, faults);
  if (settings.axes.length === 0) faults['sweep'] = 'Vary at least one quantity.';
  const targets = settings.axes.map(({ target }, place) => {
    const found = known.get(target);
    if (!found) faults[`sweep.axes[${place}].target`] = 'Choose what to vary.';
    return found ?? { kind: 'parameter' as const, id: target };
  });
  const range = ({ from, to }: AxisSettings, place: number) => {
    for (const [field, text] of [
      ['from', from],
      ['to', to],
    ] as const)
      if (text.trim() === '' || Number.isNaN(Number(text))) faults[`sweep.axes[${place}].${field}`] = 'Give a number.';
    return { from: Number(from), to: Number(to) };
  };
  const whole = (text: string, path: string, least: number): number => {
    const count = Number(text);
    if (!Number.isInteger(count) || count < least) faults[path] = `A whole number from ${least} up.`;
    return count;
  };
  if (settings.kind === 'latin_hypercube') {
    if (!/^\d{1,19}$/.test(settings.seed.trim())) faults['sweep.seed'] = 'A whole number from 0 up.';
    return {
      kind: 'latin_hypercube',
      count: whole(settings.count, 'sweep.count', 1),
      seed: faults['sweep.seed'] ? '0' : settings.seed.trim(),
      axes: settings.axes.map((axis, place) => ({
        target: targets[place]!,
        ...range(axis, place),
        scale: axis.spacing === 'log' ? 'log' : 'linear',
      })),
    };
  }
  return {
    kind: 'grid',
    axes: settings.axes.map((axis, place) => {
      const target = targets[place]!;
      if (axis.spacing !== 'values') {
        const count = whole(axis.count, `sweep.axes[${place}].count`, 2);
        return { target, spacing: { ...range(axis, place), count, scale: axis.spacing } };
      }
      const values = numbersIn(axis.values);
      if (values.length === 0 || values.some(Number.isNaN))
        faults[`sweep.axes[${place}].values`] = 'Give numbers with commas or spaces between them.';
      return { target, values };
    }),
  };
}

function listOf(text: string, known: Map<string, SweepTarget>, faults: Record<string, string>): Request {
  const [head = '', ...rows] = text.split('\n').filter((line) => line.trim() !== '');
  const names = head.split(/[\t,; ]+/).filter(Boolean);
  const unknown = names.filter((name) => !known.has(name));
  if (names.length === 0) faults['sweep.list'] = 'Give a first line of names, then a line for each point.';
  else if (unknown.length > 0)
    faults['sweep.list'] = `${unknown.join(', ')}: not among what this model lets a sweep set.`;
  const values = rows.map(numbersIn);
  const bad = values.findIndex((row) => row.length !== names.length || row.some(Number.isNaN));
  if (bad >= 0) faults['sweep.list'] ??= `Line ${bad + 2} does not have ${names.length} numbers.`;
  return { kind: 'list', targets: names.map((name) => known.get(name) ?? { kind: 'parameter', id: name }), values };
}

/** The sweep of an earlier job, point by point. */
export function sweepSettingsOf({ sweep }: Pick<JobDocument, 'sweep'>): SweepSettings {
  if (!sweep) return noSweep;
  const lines = [sweep.targets.map(targetName), ...sweep.values.map((row) => row.map(String))];
  return { ...noSweep, kind: 'list', list: lines.map((line) => line.join(', ')).join('\n') };
}
