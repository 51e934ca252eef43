/**
 * Where the SIMD kernel keeps its lanes between calls: one table per quantity, 8 bytes per lane, so that two neighbouring lanes
 * are one vector. It lies behind the tables of memory-layout.ts.
 */
import { structureLayout } from './memory-layout.ts';
import type { PreparedNetwork } from './prepared-network.ts';

/** Vectors of two lanes that the kernel advances side by side. */
export const vectors = 2;
export const laneCount = 2 * vectors;
const tableBytes = 8 * laneCount;

/** Lanes are looked at for large counts this often; a count grows by at most 1000 a firing. */
export const firingsBetweenChecks = 1024;
/** Above this a lane's replicate is handed over to the scalar kernel, which watches every firing for overflow. */
export const largestLaneCount = 2 ** 30;
export const largestLaneChange = 1000;
/** In place of a replicate's firings: it was handed over to the scalar kernel. */
export const handedOver = -1;

export interface LaneLayout {
  /** i32: lanes with a replicate. */
  activeLanes: number;
  /** f64: steps of all lanes so far; a lane's firings are the steps since its start. */
  steps: number;
  /** f64: the step count at which lanes must be looked at. */
  checkAt: number;
  /** f64: the step count at which the first lane reaches its event limit. */
  limitAt: number;
  /** f64 by lane. */
  time: number;
  newTime: number;
  /** The next grid time or timed change, whichever comes first. */
  nextStopTime: number;
  start: number;
  /** i32 by lane, each in 8 bytes; slot −1 is an idle lane. */
  gridIndex: number;
  changeIndex: number;
  slot: number;
  /** i64: four tables by lane. */
  generator: number;
  /** f64: one table by lane for each place of the state: after the last firing, and before it where a lane needs attention. */
  counts: number;
  countsBefore: number;
  /** f64 rows: for each reaction the changes of `prepared.changing`, in order. */
  changes: number;
  changeRowBytes: number;
  tableBytes: number;
  end: number;
}

export function laneLayout(prepared: PreparedNetwork): LaneLayout {
  let next = Math.ceil(structureLayout(prepared).end / 16) * 16;
  const take = (bytes: number): number => {
    const address = next;
    next += Math.ceil(bytes / 16) * 16;
    return address;
  };
  const changeRowBytes = 8 * prepared.changing.length;
  return {
    activeLanes: take(4),
    steps: take(8),
    checkAt: take(8),
    limitAt: take(8),
    time: take(tableBytes),
    newTime: take(tableBytes),
    nextStopTime: take(tableBytes),
    start: take(tableBytes),
    gridIndex: take(tableBytes),
    changeIndex: take(tableBytes),
    slot: take(tableBytes),
    generator: take(4 * tableBytes),
    counts: take(prepared.stateSize * tableBytes),
    countsBefore: take(prepared.stateSize * tableBytes),
    changes: take(prepared.reactions.length * changeRowBytes),
    changeRowBytes,
    tableBytes,
    end: next,
  };
}

/** The table of changes as the kernel reads it, reaction by reaction. */
export function changeTable(prepared: PreparedNetwork): Float64Array {
  const width = prepared.changing.length;
  const table = new Float64Array(prepared.reactions.length * width);
  prepared.reactions.forEach(({ changes }, reaction) => {
    for (const { species, count } of changes) table[reaction * width + prepared.changing.indexOf(species)] = count;
  });
  return table;
}
