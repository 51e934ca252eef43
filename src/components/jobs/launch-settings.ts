/** What the launch form holds as text, and how it becomes a quote request or a list of what is wrong, field by field. */
import type { z } from 'zod';
import type { JobDocument, quoteRequest } from '@/contracts/jobs.ts';
import { limits } from '@/domain/limits.ts';
import type { NetworkDocument } from '@/domain/network/document.ts';
import { resolveNetwork } from '@/domain/network/resolve-network.ts';
import type { PassageInput } from '@/domain/jobs/job-inputs.ts';
import { defaultEpsilon } from '@/domain/jobs/method-comparison.ts';
import type { Lane, MethodFamily } from '@/domain/pricing/price-book.ts';
import { noSweep, readSweepSettings, sweepSettingsOf, type SweepSettings } from './sweep/sweep-settings.ts';

export interface PassageSettings {
  observable: string;
  direction: 'rises_to' | 'falls_to';
  threshold: string;
}

export interface StoppingSettings {
  kind: 'replicates' | 'precision';
  /** Empty: the model's first species. */
  observable: string;
  /** Empty: the horizon. */
  time: string;
  measure: 'relative' | 'absolute';
  /** Per cent of the mean, or the observable's own unit. */
  halfWidth: string;
}

export interface LaunchSettings {
  /** Empty: named after the model. */
  name: string;
  replicates: string;
  horizon: string;
  gridIntervals: string;
  method: MethodFamily;
  /** Of tau-leaping; kept while the exact method is chosen. */
  epsilon: string;
  /** Empty: drawn by the server. */
  seed: string;
  keptTraces: string;
  passages: PassageSettings[];
  stopping: StoppingSettings;
  lane: Lane;
  /** Id of a project code; empty for none. */
  projectCode: string;
  /** Credits; empty for the quote's high end. */
  cap: string;
  /** Text by parameter id and by species id; empty text means the model's own value. */
  parameters: Record<string, string>;
  initialCounts: Record<string, string>;
  /** When timed changes first happen. */
  changeTimes: Record<string, string>;
  sweep: SweepSettings;
}

export type QuoteRequestBody = z.input<typeof quoteRequest>;
/** Messages by field: `replicates`, `parameters.k1`, `initialCounts.A`. */
export type FieldFaults = Record<string, string>;

/** Horizons to begin with, by the model's unit of time, until a job of the model says better. */
const firstHorizons: Record<string, string> = { s: '100', min: '120', h: '48', d: '30', day: '30', days: '30' };

const byReplicates: StoppingSettings = {
  kind: 'replicates',
  observable: '',
  time: '',
  measure: 'relative',
  halfWidth: '1',
};

export const firstSettings = (network: NetworkDocument): LaunchSettings => ({
  name: '',
  replicates: '1000',
  horizon: firstHorizons[network.timeUnit ?? ''] ?? '100',
  gridIntervals: '100',
  method: 'exact',
  epsilon: String(defaultEpsilon),
  seed: '',
  keptTraces: '20',
  passages: [],
  stopping: byReplicates,
  lane: 'steady',
  projectCode: '',
  cap: '',
  parameters: {},
  initialCounts: {},
  changeTimes: {},
  sweep: noSweep,
});

const texts = (values: Record<string, number> | undefined): Record<string, string> =>
  Object.fromEntries(Object.entries(values ?? {}).map(([id, value]) => [id, String(value)]));

/** The settings of an earlier job: to run it again (same seed) or as a clone (a new seed will be drawn). */
export const settingsOfJob = (job: JobDocument, keepSeed: boolean): LaunchSettings => ({
  name: job.name,
  replicates: String(job.replicatesPlanned),
  horizon: String(job.horizon),
  gridIntervals: String(job.gridIntervals),
  method: job.method,
  epsilon: String(job.epsilon ?? defaultEpsilon),
  seed: keepSeed ? job.seed : '',
  keptTraces: String(job.keptTraces),
  stopping: stoppingSettingsOf(job),
  passages: job.passages.map((passage) => ({ ...passage, threshold: String(passage.threshold) })),
  lane: job.lane,
  projectCode: job.projectCode?.id ?? '',
  cap: '',
  parameters: texts(job.overrides.parameters),
  initialCounts: texts(job.overrides.initialCounts),
  changeTimes: texts(job.overrides.changeTimes),
  sweep: sweepSettingsOf(job),
});

function stoppingSettingsOf({ stopping }: JobDocument): StoppingSettings {
  if (stopping === null) return byReplicates;
  const { observable, time, relative, absolute } = stopping;
  return {
    kind: 'precision',
    observable,
    time: String(time),
    measure: relative === undefined ? 'absolute' : 'relative',
    halfWidth: relative === undefined ? String(absolute) : String(Number((100 * relative).toPrecision(12))),
  };
}

/** "10,000", "1e4" and "10 000" are one number; NaN when the text states none. */
export function numberIn(text: string): number {
  const compact = text.trim().replaceAll(/[\s,_\u2009]/g, '');
  return /^[+-]?(\d+\.?\d*|\.\d+)(e[+-]?\d+)?$/i.test(compact) ? Number(compact) : NaN;
}

function wholeFault(value: number, least: number, most: number): string | null {
  if (Number.isNaN(value)) return 'Give a number.';
  if (!Number.isInteger(value)) return 'Give a whole number.';
  if (value < least) return `At least ${least.toLocaleString('en-GB')}.`;
  return value > most ? `At most ${most.toLocaleString('en-GB')}.` : null;
}

/** The cap in microcredits, undefined when left to the quote. */
export function capOf(text: string): { ok: true; microcredits: number | undefined } | { ok: false; fault: string } {
  if (text.trim() === '') return { ok: true, microcredits: undefined };
  const microcredits = Math.round(numberIn(text) * 1e6);
  if (Number.isNaN(microcredits)) return { ok: false, fault: 'Give a number of credits.' };
  if (microcredits <= 0) return { ok: false, fault: 'A cap is above 0.' };
  if (microcredits > limits.integer) return { ok: false, fault: 'That is more credits than there are.' };
  return { ok: true, microcredits };
}

/** The request that the settings mean, or the faults of every field. Caps and names are looked at when launching. */
export function quoteRequestOf(
  settings: LaunchSettings,
  version: { id: string; network: NetworkDocument },
): { ok: true; request: QuoteRequestBody } | { ok: false; faults: FieldFaults } {
  const replicates = numberIn(settings.replicates);
  const horizon = numberIn(settings.horizon);
  const gridIntervals = numberIn(settings.gridIntervals);
  const keptTraces = numberIn(settings.keptTraces);
  const epsilon = numberIn(settings.epsilon);
  const seed = settings.seed.replaceAll(/\s/g, '');
  const faults: FieldFaults = {};
  const check = (field: string, fault: string | null): void => {
    if (fault !== null) faults[field] = fault;
  };
  check('replicates', wholeFault(replicates, 1, limits.replicatesPerJob));
  check('horizon', Number.isNaN(horizon) ? 'Give a number.' : horizon <= 0 ? 'A horizon is above 0.' : null);
  check('gridIntervals', wholeFault(gridIntervals, 1, limits.gridIntervals));
  if (settings.method === 'leap')
    check('epsilon', epsilon > 0 && epsilon <= 0.5 ? null : 'Give a number above 0, at most 0.5.');
  check('keptTraces', wholeFault(keptTraces, 0, limits.keptTraces));
  if (seed !== '' && !(/^\d{1,20}$/.test(seed) && BigInt(seed) < 2n ** 64n)) {
    faults['seed'] = 'A seed is a whole number from 0 to 18,446,744,073,709,551,615.';
  }
  const { stopping } = settings;
  if (stopping.kind === 'precision') {
    const halfWidth = numberIn(stopping.halfWidth);
    const most = stopping.measure === 'relative' ? 100 : Infinity;
    check('stopping.halfWidth', halfWidth > 0 && halfWidth <= most ? null : 'Give a number above 0.');
    check('stopping.time', stopping.time !== '' && Number.isNaN(numberIn(stopping.time)) ? 'Give a number.' : null);
  }
  settings.passages.forEach(({ threshold }, index) =>
    check(`passages[${index}].threshold`, Number.isNaN(numberIn(threshold)) ? 'Give a number.' : null),
  );
  const changeTimes = filled(settings.changeTimes);
  const overrides = {
    parameters: filled(settings.parameters),
    initialCounts: filled(settings.initialCounts),
    ...(Object.keys(changeTimes).length > 0 ? { changeTimes } : {}),
  };
  const resolved = resolveNetwork(version.network, overrides);
  if (!resolved.ok) {
    for (const { path, message } of resolved.problems) {
      if (path.startsWith('overrides.')) faults[path.slice('overrides.'.length)] ??= message;
      else faults['model'] ??= message;
    }
  }
  const sweep = readSweepSettings(settings.sweep, version.network);
  if (!sweep.ok) Object.assign(faults, sweep.faults);
  if (Object.keys(faults).length > 0 || !sweep.ok) return { ok: false, faults };
  return {
    ok: true,
    request: {
      modelVersionId: version.id,
      replicates,
      horizon,
      gridIntervals,
      method: settings.method,
      ...(settings.method === 'leap' ? { epsilon } : {}),
      ...(stopping.kind === 'precision' ? { stopping: stoppingOf(stopping, version.network, horizon) } : {}),
      lane: settings.lane,
      ...(seed === '' ? {} : { seed }),
      ...(Object.keys({ ...overrides.parameters, ...overrides.initialCounts, ...changeTimes }).length > 0
        ? { overrides }
        : {}),
      ...(sweep.request ? { sweep: sweep.request } : {}),
      outputs: { keptTraces, ...(settings.passages.length > 0 ? { passages: settings.passages.map(passageOf) } : {}) },
    },
  };
}

function stoppingOf(stopping: StoppingSettings, network: NetworkDocument, horizon: number) {
  const target = {
    kind: 'precision' as const,
    observable: stopping.observable || (network.species[0]?.id ?? ''),
    time: stopping.time.trim() === '' ? horizon : numberIn(stopping.time),
  };
  const halfWidth = numberIn(stopping.halfWidth);
  return stopping.measure === 'relative'
    ? { ...target, relative: halfWidth / 100 }
    : { ...target, absolute: halfWidth };
}

const passageOf = (passage: PassageSettings) =>
  passageRequestOf({ ...passage, threshold: numberIn(passage.threshold) });

/** A passage as requests write it. */
export const passageRequestOf = ({ observable, direction, threshold }: PassageInput) =>
  direction === 'rises_to' ? { observable, risesTo: threshold } : { observable, fallsTo: threshold };

/** Numbers of the filled cells; a text that is no number becomes NaN, which the network's checks name. */
const filled = (cells: Record<string, string>): Record<string, number> =>
  Object.fromEntries(
    Object.entries(cells)
      .filter(([, text]) => text.trim() !== '')
      .map(([id, text]) => [id, numberIn(text)]),
  );

/** The server's faults of a quote request, put to the fields of the form. */
export function faultsOfProblem(errors: readonly { path: string; message: string }[] | undefined): FieldFaults {
  const faults: FieldFaults = {};
  for (const { path, message } of errors ?? []) {
    const field = path
      .replace(/^overrides\./, '')
      .replace(/^outputs\./, '')
      .replace(/^modelVersionId$/, 'model')
      .replace(/^sweep\.points\[\d+\]$/, 'sweep');
    faults[field] ??= message;
  }
  return faults;
}
