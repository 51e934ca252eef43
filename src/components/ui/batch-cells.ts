/** Batches as the strip shows them: neighbours of one point joined when there are too many to see. */

export type BatchState = 'waiting' | 'running' | 'done' | 'failed' | 'discarded';

export interface Batch {
  /** Which point of a sweep; 0 when there is only one. */
  point: number;
  state: BatchState;
  replicates: number;
  events: number;
  chargedMicrocredits: number;
  seconds: number;
}

export interface BatchCell {
  point: number;
  /** Numbers of its batches, from 1, in the order given. */
  first: number;
  last: number;
  /** By state, how many batches. */
  batches: Record<BatchState, number>;
  state: BatchState;
  replicates: number;
  events: number;
  chargedMicrocredits: number;
  seconds: number;
}

/** A joined cell shows trouble first, then work under way, then done only when all of it is. */
function stateOf(batches: Record<BatchState, number>): BatchState {
  if (batches.failed > 0) return 'failed';
  if (batches.running > 0) return 'running';
  if (batches.waiting > 0) return batches.done > 0 ? 'running' : 'waiting';
  return batches.done > 0 ? 'done' : 'discarded';
}

/** At most about `mostCells` cells: every point keeps at least one, and no cell spans two points. */
export function batchCells(batches: readonly Batch[], mostCells: number): BatchCell[] {
  const perCell = Math.max(1, Math.ceil(batches.length / mostCells));
  const cells: BatchCell[] = [];
  batches.forEach((batch, index) => {
    let cell = cells.at(-1);
    if (!cell || cell.point !== batch.point || cell.last - cell.first + 1 >= perCell) {
      cell = {
        point: batch.point,
        first: index + 1,
        last: index,
        batches: { waiting: 0, running: 0, done: 0, failed: 0, discarded: 0 },
        state: 'waiting',
        replicates: 0,
        events: 0,
        chargedMicrocredits: 0,
        seconds: 0,
      };
      cells.push(cell);
    }
    cell.last = index + 1;
    cell.batches[batch.state] += 1;
    cell.state = stateOf(cell.batches);
    cell.replicates += batch.replicates;
    cell.events += batch.events;
    cell.chargedMicrocredits += batch.chargedMicrocredits;
    cell.seconds += batch.seconds;
  });
  return cells;
}
