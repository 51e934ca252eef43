/** Square sparse matrices by columns: where the entries stand, apart from their values. */

/** Column j holds rows[columnStart[j]] … rows[columnStart[j + 1] − 1], ascending; the whole diagonal is always in it. */
export interface SparsePattern {
  size: number;
  columnStart: Int32Array;
  rows: Int32Array;
  /** Position of entry (j, j) in `rows`. */
  diagonal: Int32Array;
}

/** The pattern with the given rows in each column (in any order, repeated or not) and the diagonal. */
export function patternOf(rowsOfColumns: Iterable<number>[]): SparsePattern {
  const size = rowsOfColumns.length;
  const columns = rowsOfColumns.map((rows, column) => [...new Set([...rows, column])].sort((a, b) => a - b));
  const columnStart = new Int32Array(size + 1);
  columns.forEach((rows, column) => {
    columnStart[column + 1] = columnStart[column]! + rows.length;
  });
  return {
    size,
    columnStart,
    rows: Int32Array.from(columns.flat()),
    diagonal: Int32Array.from(columns, (rows, column) => columnStart[column]! + rows.indexOf(column)),
  };
}

/** Position of entry (row, column) in `pattern.rows`. Throws when the pattern does not have it. */
export function positionOf(pattern: SparsePattern, row: number, column: number): number {
  let low = pattern.columnStart[column]!;
  let high = pattern.columnStart[column + 1]! - 1;
  while (low <= high) {
    const middle = (low + high) >> 1;
    const found = pattern.rows[middle]!;
    if (found === row) return middle;
    if (found < row) low = middle + 1;
    else high = middle - 1;
  }
  throw new Error(`entry (${row}, ${column}) is not in the pattern`);
}
