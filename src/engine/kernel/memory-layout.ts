/**
 * Where a kernel of the direct method finds its things in memory: a control block at fixed addresses, then tables whose place
 * depends on the network's structure, then tables whose size depends on the grid; their addresses stand in the control block.
 */
import type { PreparedNetwork } from './prepared-network.ts';

/** Addresses in the control block. */
export const control = {
  /** i64: key of replicate r is mix64(streamBase + r). */
  streamBase: 0,
  /** i64: the replicate of slot 0. */
  firstReplicate: 8,
  /** i32: the slot that runs or runs next; slots are replicates of this call's group. */
  slot: 16,
  /** i32: slots to run. */
  slotCount: 20,
  /** i32: 1 while a replicate is under way. */
  active: 24,
  /** i32 */
  gridIntervals: 28,
  /** f64: firings allowed in one replicate. */
  eventLimit: 32,
  /** i32: addresses of the tables. */
  gridTimes: 40,
  events: 44,
  counts: 48,
  reals: 52,
  /** i32: bytes between one cell's values and the next cell's, for counts (4 B each); twice that for reals. */
  cellBytes: 56,
  /** i32: the reaction whose firing overflowed, or the change that could not be made. */
  failedIndex: 60,
  /** f64: time of the failure. */
  failureTime: 64,
  /** What is saved of a replicate under way: f64 time, i32 next grid index, f64 firings, four i64 of its generator. */
  time: 72,
  gridIndex: 80,
  firings: 88,
  generator: 96,
  /** i32: the next entry of the schedule. */
  changeIndex: 128,
  /** i32: a bit for each passage made. */
  passed: 132,
  /** i32: addresses of the schedule of timed changes and of the table of passage times. */
  schedule: 136,
  passages: 140,
  /** Of tau-leaping: i32 exact steps left, f64 ε, f64 the longest leap after a rejected one. */
  exactSteps: 144,
  epsilon: 152,
  longestLeap: 160,
  end: 168,
} as const;

/** What a call of a kernel answers. */
export const status = {
  paused: 0,
  finished: 1,
  badPropensity: 2,
  countOverflow: 3,
  eventLimit: 4,
  badAssignment: 5,
  changeCascade: 6,
} as const;

/** Bytes of an entry of the schedule: f64 time, i32 position among the timed changes. */
export const scheduleEntryBytes = 16;

export const largestCount = 2 ** 31 - 1;
/** A total propensity above this counts as not a number. */
export const largestTotal = 1e300;

/** Addresses that the code contains; they follow from the network's structure. */
export interface StructureLayout {
  constants: number;
  /** The state in which replicates begin, as f64. */
  initialState: number;
  /** The state of a paused or failed replicate, as f64. */
  savedState: number;
  end: number;
}

export function structureLayout(prepared: PreparedNetwork): StructureLayout {
  const constants = control.end;
  const initialState = constants + 8 * prepared.constants.length;
  const savedState = initialState + 8 * prepared.stateSize;
  return { constants, initialState, savedState, end: savedState + 8 * prepared.stateSize };
}

/** Addresses of the tables whose size depends on the task. */
export interface TaskLayout {
  gridTimes: number;
  events: number;
  /** i32 counts: [grid point][count observable][slot]. */
  counts: number;
  /** f64 values: [grid point][real observable][slot]. */
  reals: number;
  /** Entries of f64 time and i32 change; one more with an infinite time ends them. */
  schedule: number;
  /** f64 times of first passage: [passage][slot]. */
  passages: number;
  end: number;
}

export function taskLayout(options: {
  prepared: PreparedNetwork;
  structureEnd: number;
  gridIntervals: number;
  slots: number;
  scheduleEntries: number;
}): TaskLayout {
  const { prepared, structureEnd, gridIntervals, slots, scheduleEntries } = options;
  const points = gridIntervals + 1;
  const gridTimes = Math.ceil(structureEnd / 16) * 16;
  const events = gridTimes + 8 * points;
  const reals = events + 8 * slots;
  const counts = reals + 8 * points * prepared.realObservables.length * slots;
  const countsEnd = counts + 4 * points * prepared.countObservables.length * slots;
  const schedule = Math.ceil(countsEnd / 8) * 8;
  const passages = schedule + scheduleEntryBytes * (scheduleEntries + 1);
  const end = passages + 8 * prepared.passages.length * slots;
  return { gridTimes, events, reals, counts, schedule, passages, end };
}
