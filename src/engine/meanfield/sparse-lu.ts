/** Solves sparse linear systems by triangular factors with pivoting. */
import type { SparsePattern } from './sparse-matrix.ts';

/** A diagonal entry is the pivot while it is at least this part of the largest candidate. */
const diagonalPreference = 0.1;

/**
 * P·A·Q = L·U by columns: each column is a sparse triangular solve with the columns of L so far, whose pattern a
 * depth-first search finds first, in time proportional to the multiplications done (Gilbert & Peierls 1988, SIAM J. Sci.
 * Stat. Comput. 9:862; Davis, Direct Methods for Sparse Linear Systems, 2006, ch. 6; citations from memory). Q is given;
 * P prefers the diagonal, so that an order made for a symmetric pattern stays sparse.
 */
export class SparseLu {
  readonly #pattern: SparsePattern;
  readonly #order: Int32Array;
  /** Row chosen as pivot k, and for each row its k or −1. */
  readonly #pivotRow: Int32Array;
  readonly #pivotOfRow: Int32Array;
  readonly #pivotValue: Float64Array;
  readonly #lower = new GrowingColumns();
  readonly #upper = new GrowingColumns();
  readonly #work: Float64Array;
  readonly #permuted: Float64Array;
  /** Reached rows stand in topological order from `top` to the end of `reached`; `path` is the search's own stack. */
  readonly #reached: Int32Array;
  readonly #path: Int32Array;
  readonly #next: Int32Array;
  readonly #mark: Int32Array;
  #markValue = 0;

  /** `order` lists all columns of `pattern` in order of elimination. */
  constructor(pattern: SparsePattern, order: Int32Array) {
    const { size } = pattern;
    this.#pattern = pattern;
    this.#order = order;
    this.#pivotRow = new Int32Array(size);
    this.#pivotOfRow = new Int32Array(size);
    this.#pivotValue = new Float64Array(size);
    this.#work = new Float64Array(size);
    this.#permuted = new Float64Array(size);
    this.#reached = new Int32Array(size);
    this.#path = new Int32Array(size);
    this.#next = new Int32Array(size);
    this.#mark = new Int32Array(size);
  }

  /** Factorises the matrix with `values` on the pattern. False when it is singular or not finite; `solve` is then not allowed. */
  factorise(values: Float64Array): boolean {
    this.#pivotOfRow.fill(-1);
    this.#lower.clear();
    this.#upper.clear();
    for (let step = 0; step < this.#pattern.size; step++) {
      const column = this.#order[step]!;
      const top = this.#reach(column);
      this.#solveColumn(column, values, top);
      if (!this.#storeColumn(step, column, top)) return false;
    }
    return true;
  }

  /** Overwrites `right` with the solution x of A·x = right. */
  solve(right: Float64Array): void {
    const { size } = this.#pattern;
    const [lower, upper, permuted] = [this.#lower, this.#upper, this.#permuted];
    for (let step = 0; step < size; step++) {
      const value = right[this.#pivotRow[step]!]!;
      permuted[step] = value;
      for (let p = lower.start[step]!; p < lower.start[step + 1]!; p++)
        right[lower.index[p]!]! -= lower.value[p]! * value;
    }
    for (let step = size - 1; step >= 0; step--) {
      const value = permuted[step]! / this.#pivotValue[step]!;
      right[this.#order[step]!] = value;
      for (let p = upper.start[step]!; p < upper.start[step + 1]!; p++) {
        permuted[upper.index[p]!]! -= upper.value[p]! * value;
      }
    }
  }

  /** Finds the rows of L⁻¹·A(:, column) that can differ from 0; answers where they start in `reached`. */
  #reach(column: number): number {
    const { columnStart, rows, size } = this.#pattern;
    const { start, index } = this.#lower;
    this.#markValue++;
    let top = size;
    for (let p = columnStart[column]!; p < columnStart[column + 1]!; p++) {
      if (this.#mark[rows[p]!] === this.#markValue) continue;
      let depth = 0;
      this.#enter(rows[p]!, depth);
      while (depth >= 0) {
        const row = this.#path[depth]!;
        const pivot = this.#pivotOfRow[row]!;
        const end = pivot < 0 ? 0 : start[pivot + 1]!;
        let next = this.#next[depth]!;
        while (next < end && this.#mark[index[next]!] === this.#markValue) next++;
        this.#next[depth] = next + 1;
        if (next < end) this.#enter(index[next]!, ++depth);
        else {
          this.#reached[--top] = row;
          depth--;
        }
      }
    }
    return top;
  }

  #enter(row: number, depth: number): void {
    const pivot = this.#pivotOfRow[row]!;
    this.#mark[row] = this.#markValue;
    this.#path[depth] = row;
    this.#next[depth] = pivot < 0 ? 0 : this.#lower.start[pivot]!;
  }

  #solveColumn(column: number, values: Float64Array, top: number): void {
    const { columnStart, rows, size } = this.#pattern;
    const { start, index, value } = this.#lower;
    const work = this.#work;
    for (let p = top; p < size; p++) work[this.#reached[p]!] = 0;
    for (let p = columnStart[column]!; p < columnStart[column + 1]!; p++) work[rows[p]!] = values[p]!;
    for (let p = top; p < size; p++) {
      const row = this.#reached[p]!;
      const pivot = this.#pivotOfRow[row]!;
      if (pivot < 0) continue;
      const factor = work[row]!;
      for (let q = start[pivot]!; q < start[pivot + 1]!; q++) work[index[q]!]! -= value[q]! * factor;
    }
  }

  #storeColumn(step: number, column: number, top: number): boolean {
    const { size } = this.#pattern;
    const work = this.#work;
    let pivotRow = -1;
    let largest = 0;
    for (let p = top; p < size; p++) {
      const row = this.#reached[p]!;
      if (this.#pivotOfRow[row]! >= 0) this.#upper.push(this.#pivotOfRow[row]!, work[row]!);
      else if (Math.abs(work[row]!) > largest) {
        largest = Math.abs(work[row]!);
        pivotRow = row;
      }
    }
    this.#upper.endColumn();
    if (pivotRow < 0 || !Number.isFinite(largest)) return false;
    const isDiagonalFree = this.#pivotOfRow[column]! < 0;
    if (isDiagonalFree && Math.abs(work[column]!) >= diagonalPreference * largest) pivotRow = column;
    const pivotValue = work[pivotRow]!;
    this.#pivotRow[step] = pivotRow;
    this.#pivotOfRow[pivotRow] = step;
    this.#pivotValue[step] = pivotValue;
    for (let p = top; p < size; p++) {
      const row = this.#reached[p]!;
      if (this.#pivotOfRow[row]! < 0) this.#lower.push(row, work[row]! / pivotValue);
    }
    this.#lower.endColumn();
    return true;
  }
}

/** Columns appended one after the other; the storage grows and is kept for the next factorisation. */
class GrowingColumns {
  start: number[] = [0];
  index = new Int32Array(64);
  value = new Float64Array(64);
  #length = 0;

  clear(): void {
    this.#length = 0;
    this.start = [0];
  }

  push(index: number, value: number): void {
    if (this.#length === this.index.length) this.#grow();
    this.index[this.#length] = index;
    this.value[this.#length++] = value;
  }

  endColumn(): void {
    this.start.push(this.#length);
  }

  #grow(): void {
    const [index, value] = [new Int32Array(2 * this.#length), new Float64Array(2 * this.#length)];
    index.set(this.index);
    value.set(this.value);
    [this.index, this.value] = [index, value];
  }
}
