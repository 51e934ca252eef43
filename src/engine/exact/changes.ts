/**
 * Timed and triggered changes in plain TypeScript: what the reference does, what is worked out before a replicate begins, and
 * what the generated kernels obey (kernel/emit-changes.ts). exact/direct-method.ts says when they are called.
 */
import { limits } from '@/domain/limits.ts';
import type { ResolvedNetwork } from '@/domain/network/resolved.ts';
import { evaluateTerm, type StateValues } from '../kernel/evaluate.ts';
import { largestCount } from '../kernel/memory-layout.ts';
import type { PreparedNetwork } from '../kernel/prepared-network.ts';

/** A count may miss a whole number by this part of itself (of 1 below 1): a few units in the last place of a product. */
export const wholeTolerance = 2 ** -48;

export interface ChangeFault {
  kind: 'bad_assignment' | 'change_cascade';
  change: number;
}

/** Moments of timed changes after time 0, in order; those of one moment in document order. */
export interface ScheduledChange {
  time: number;
  change: number;
}

export function scheduleOf({ changes = [] }: ResolvedNetwork): ScheduledChange[] {
  const moments = changes.flatMap(({ when }, change) =>
    when.kind === 'times' ? when.times.map((time) => ({ time, change })) : [],
  );
  return moments.filter(({ time }) => time > 0).sort((a, b) => a.time - b.time || a.change - b.change);
}

/** The values of assigned parameters in the given state, in their order. */
export function stateValues(
  prepared: PreparedNetwork,
  constants: ArrayLike<number>,
  state: ArrayLike<number>,
): StateValues {
  const values: StateValues = { counts: state, constants, assigned: [] };
  for (const term of prepared.assigned) values.assigned.push(evaluateTerm(term, values));
  return values;
}

/** Makes one change in place; all values are worked out before any is set. */
export function makeChange(
  prepared: PreparedNetwork,
  constants: ArrayLike<number>,
  state: number[] | Float64Array,
  change: number,
): ChangeFault | null {
  const { sets } = prepared.changes[change]!;
  const before = stateValues(prepared, constants, state);
  const values = sets.map(({ value }) => evaluateTerm(value, before));
  const checked = sets.map(({ isCount }, i) => (isCount ? wholeCount(values[i]!) : finite(values[i]!)));
  if (checked.includes(null)) return { kind: 'bad_assignment', change };
  sets.forEach(({ place }, i) => (state[place] = checked[i]!));
  return null;
}

/** The whole number that the value means, or null. */
function wholeCount(value: number): number | null {
  const whole = nearest(value);
  const near = Math.abs(value - whole) <= wholeTolerance * Math.max(1, Math.abs(value));
  return near && whole >= 0 && whole <= largestCount ? whole : null;
}

const finite = (value: number): number | null => (Math.abs(value) < Infinity ? value : null);

/** Rounded to the nearest whole number, halves to even, as WebAssembly's f64.nearest; never −0. */
function nearest(value: number): number {
  const below = Math.floor(value);
  const rest = value - below;
  const up = rest > 0.5 || (rest === 0.5 && below % 2 !== 0);
  return (up ? below + 1 : below) + 0;
}

/**
 * Lets triggered changes happen until none is due: conditions are looked at in document order, those that have become true
 * are due, the first due one in document order happens, and conditions are looked at again. Answers how many were made.
 */
export function settleTriggers(
  prepared: PreparedNetwork,
  constants: ArrayLike<number>,
  state: number[] | Float64Array,
): ChangeFault | number {
  const due = new Set<number>();
  for (let made = 0; ; made++) {
    const values = stateValues(prepared, constants, state);
    prepared.changes.forEach(({ condition, held }, change) => {
      if (condition === null) return;
      const holds = evaluateTerm(condition, values) !== 0 ? 1 : 0;
      if (holds === 1 && state[held!] === 0) due.add(change);
      state[held!] = holds;
    });
    const next = Math.min(...due);
    if (next === Infinity) return made;
    if (made === limits.changeCascade) return { kind: 'change_cascade', change: next };
    due.delete(next);
    const fault = makeChange(prepared, constants, state, next);
    if (fault) return fault;
  }
}

/**
 * The state in which every replicate of a point begins: the initial counts and parameters, after the timed changes at time 0 in
 * document order and the triggered ones that follow.
 */
export function initialState(
  prepared: PreparedNetwork,
  network: ResolvedNetwork,
  constants: ArrayLike<number>,
): { state: Float64Array; fault: ChangeFault | null } {
  const state = new Float64Array(prepared.stateSize);
  network.species.forEach(({ initialCount }, place) => (state[place] = initialCount));
  prepared.variables.forEach((parameter, i) => {
    state[prepared.speciesCount + i] = network.parameters[parameter]!.value;
  });
  prepared.changes.forEach(({ held }, change) => {
    const when = network.changes![change]!.when;
    if (held !== null && when.kind === 'condition') state[held] = when.before ? 1 : 0;
  });
  for (const [change, { when }] of (network.changes ?? []).entries()) {
    if (when.kind !== 'times') continue;
    for (const time of when.times) {
      const fault = time === 0 ? makeChange(prepared, constants, state, change) : null;
      if (fault) return { state, fault };
    }
  }
  const settled = settleTriggers(prepared, constants, state);
  return { state, fault: typeof settled === 'number' ? null : settled };
}
