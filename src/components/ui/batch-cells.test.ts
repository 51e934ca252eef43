import { describe, expect, it } from 'vitest';
import { batchCells, type Batch } from './batch-cells.ts';

const batch = (change: Partial<Batch> = {}): Batch => ({
  point: 0,
  state: 'done',
  replicates: 100,
  events: 5_000,
  chargedMicrocredits: 5_000,
  seconds: 0.5,
  ...change,
});

describe('batchCells', () => {
  it('gives every batch its own cell while they fit', () => {
    const cells = batchCells([batch(), batch({ state: 'running' }), batch({ state: 'waiting' })], 60);
    expect(cells.map((cell) => [cell.first, cell.last, cell.state])).toEqual([
      [1, 1, 'done'],
      [2, 2, 'running'],
      [3, 3, 'waiting'],
    ]);
  });

  it('joins neighbours when there are many and loses no replicate, event or microcredit', () => {
    const many = Array.from({ length: 997 }, () => batch());
    const cells = batchCells(many, 60);
    expect(cells.length).toBeLessThanOrEqual(60);
    expect(cells.reduce((sum, cell) => sum + cell.replicates, 0)).toBe(99_700);
    expect(cells.reduce((sum, cell) => sum + cell.events, 0)).toBe(997 * 5_000);
    expect(cells.reduce((sum, cell) => sum + cell.chargedMicrocredits, 0)).toBe(997 * 5_000);
    expect(cells.at(-1)?.last).toBe(997);
  });

  it('never joins batches of two points', () => {
    const cells = batchCells([batch(), batch({ point: 1 }), batch({ point: 1 }), batch({ point: 2 })], 1);
    expect(cells.map((cell) => cell.point)).toEqual([0, 1, 2]);
  });

  it('calls a joined cell done only when all of it is, and failed when any of it is', () => {
    expect(batchCells([batch(), batch({ state: 'waiting' })], 1)[0]?.state).toBe('running');
    expect(batchCells([batch(), batch({ state: 'failed' }), batch({ state: 'running' })], 1)[0]?.state).toBe('failed');
    expect(batchCells([batch(), batch({ state: 'discarded' })], 1)[0]?.state).toBe('done');
    expect(batchCells([batch({ state: 'discarded' })], 1)[0]?.state).toBe('discarded');
  });
});
