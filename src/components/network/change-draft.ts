/** Every change that the editor can make to a draft, as functions from a draft to the next. */
import { parseEquation } from '@/domain/network/parse-equation.ts';
import { printEquation, splitReversibleEquation } from '@/domain/network/print-equation.ts';
import { lawWords, newRowCells, ticked, type Draft, type GridName, type Row } from './draft.ts';
import type { CellPlace } from './written-document.ts';

export type Change =
  | { kind: 'name' | 'timeUnit'; text: string }
  /** `key` may be that of no row yet: the empty row at the foot of a grid becomes one when typed into. */
  | { kind: 'cell'; place: CellPlace; text: string }
  | { kind: 'insert'; grid: GridName; beforeKey: string }
  | { kind: 'remove'; grid: GridName; key: string }
  | { kind: 'move'; grid: GridName; key: string; by: -1 | 1 }
  /** Text of several cells, rows by lines and columns by tabs, from `place` to the right and down. */
  | { kind: 'paste'; place: CellPlace; columns: readonly string[]; matrix: readonly (readonly string[])[] }
  /** One ⇌ becomes two rows. */
  | { kind: 'split'; key: string }
  /** Writes the arrow and the spacing the product's way once an equation is left. */
  | { kind: 'tidyEquation'; key: string }
  | { kind: 'append'; grid: GridName; cells: readonly Record<string, string>[] }
  | { kind: 'replace'; draft: Draft };

/** The key that the empty row at the foot of every grid bears until it is typed into. */
export const footKey = (draft: Draft): string => `r${draft.nextKey}`;

export function changeDraft(draft: Draft, change: Change): Draft {
  switch (change.kind) {
    case 'name':
    case 'timeUnit':
      return { ...draft, [change.kind]: change.text };
    case 'cell':
      return setCell(draft, change.place, change.text);
    case 'insert': {
      const rows = draft.grids[change.grid];
      const at = rows.findIndex(({ key }) => key === change.beforeKey);
      return at < 0 ? draft : insertRows(draft, change.grid, at, [newRowCells[change.grid]]);
    }
    case 'remove':
      return withRows(draft, change.grid, (rows) => rows.filter(({ key }) => key !== change.key));
    case 'move':
      return withRows(draft, change.grid, (rows) => moved(rows, change.key, change.by));
    case 'paste':
      return paste(draft, change.place, change.columns, change.matrix);
    case 'split':
      return split(draft, change.key);
    case 'tidyEquation':
      return tidyEquation(draft, change.key);
    case 'append':
      return insertRows(
        draft,
        change.grid,
        draft.grids[change.grid].length,
        change.cells.map((cells) => ({ ...newRowCells[change.grid], ...cells })),
      );
    case 'replace':
      return change.draft;
  }
}

const withRows = (draft: Draft, grid: GridName, change: (rows: Row[]) => Row[]): Draft => ({
  ...draft,
  grids: { ...draft.grids, [grid]: change(draft.grids[grid]) },
});

function insertRows(draft: Draft, grid: GridName, at: number, cells: readonly Record<string, string>[]): Draft {
  const rows = cells.map((row, index) => ({ key: `r${draft.nextKey + index}`, cells: { ...row } }));
  const next = withRows(draft, grid, (known) => [...known.slice(0, at), ...rows, ...known.slice(at)]);
  return { ...next, nextKey: draft.nextKey + rows.length };
}

function setCell(draft: Draft, { grid, key, column }: CellPlace, text: string): Draft {
  const rows = draft.grids[grid];
  if (!rows.some((row) => row.key === key)) {
    if (key !== footKey(draft) || text === '') return draft;
    return insertRows(draft, grid, rows.length, [{ ...newRowCells[grid], [column]: text }]);
  }
  const next = withRows(draft, grid, (known) =>
    known.map((row) => (row.key === key ? { ...row, cells: { ...row.cells, [column]: text } } : row)),
  );
  return grid === 'reactions' && column === 'id' ? renameOwner(next, rows, key, text) : next;
}

/** Local parameters follow their reaction when it is renamed. */
function renameOwner(draft: Draft, before: Row[], key: string, to: string): Draft {
  const from = before.find((row) => row.key === key)?.cells['id'] ?? '';
  if (from === '' || before.some((row) => row.key !== key && row.cells['id'] === from)) return draft;
  return withRows(draft, 'localParameters', (rows) =>
    rows.map((row) => (row.cells['reaction'] === from ? { ...row, cells: { ...row.cells, reaction: to } } : row)),
  );
}

function moved(rows: Row[], key: string, by: -1 | 1): Row[] {
  const at = rows.findIndex((row) => row.key === key);
  const to = at + by;
  if (at < 0 || to < 0 || to >= rows.length) return rows;
  const next = [...rows];
  [next[at], next[to]] = [next[to]!, next[at]!];
  return next;
}

/** Rows by lines, cells by tabs, as spreadsheets put them on the clipboard; null when it is a single cell's text. */
export function cellsOfClipboard(text: string): string[][] | null {
  const lines = text.replace(/\r\n?/g, '\n').replace(/\n$/, '').split('\n');
  if (lines.length === 1 && !lines[0]!.includes('\t')) return null;
  return lines.map((line) => line.split('\t').map((cell) => cell.replace(/^"(.*)"$/, '$1').trim()));
}

const yes = /^(true|yes|y|x|1|✓|boundary)$/i;

/** A pasted word as the column understands it: tick boxes and laws take the words people write. */
function asCell(column: string, text: string): string {
  if (column === 'boundary' || column === 'concentration') return yes.test(text) ? ticked : '';
  if (column === 'law') return /^expr/i.test(text) ? lawWords.expression : lawWords.massAction;
  return text;
}

function paste(
  draft: Draft,
  { grid, key, column }: CellPlace,
  columns: readonly string[],
  matrix: readonly (readonly string[])[],
): Draft {
  const rows = draft.grids[grid];
  const found = rows.findIndex((row) => row.key === key);
  const at = found < 0 ? rows.length : found;
  const left = Math.max(0, columns.indexOf(column));
  const lacking = Math.max(0, at + matrix.length - rows.length);
  const grown = insertRows(
    draft,
    grid,
    rows.length,
    Array.from({ length: lacking }, () => newRowCells[grid]),
  );
  return withRows(grown, grid, (known) =>
    known.map((row, index) => {
      const pasted = matrix[index - at];
      if (index < at || pasted === undefined) return row;
      const cells = { ...row.cells };
      pasted.forEach((text, offset) => {
        const target = columns[left + offset];
        if (target !== undefined) cells[target] = asCell(target, text);
      });
      return { ...row, cells };
    }),
  );
}

function split(draft: Draft, key: string): Draft {
  const rows = draft.grids.reactions;
  const at = rows.findIndex((row) => row.key === key);
  const parsed = at < 0 ? null : parseEquation(rows[at]!.cells['equation'] ?? '');
  if (parsed === null || !parsed.ok || !parsed.equation.reversible) return draft;
  const [forward, backward] = splitReversibleEquation(parsed.equation);
  const { id = '' } = rows[at]!.cells;
  const changed = withRows(draft, 'reactions', (known) =>
    known.map((row) => (row.key === key ? { ...row, cells: { ...row.cells, equation: forward } } : row)),
  );
  const taken = new Set(rows.map((row) => row.cells['id']));
  let name = id === '' ? '' : `${id}_back`;
  for (let number = 2; taken.has(name) && name !== ''; number++) name = `${id}_back${number}`;
  return insertRows(changed, 'reactions', at + 1, [{ ...newRowCells.reactions, id: name, equation: backward }]);
}

function tidyEquation(draft: Draft, key: string): Draft {
  const row = draft.grids.reactions.find((known) => known.key === key);
  const text = row?.cells['equation'] ?? '';
  const parsed = parseEquation(text);
  if (row === undefined || !parsed.ok) return draft;
  const printed = printEquation(parsed.equation);
  return printed === text ? draft : setCell(draft, { grid: 'reactions', key, column: 'equation' }, printed);
}
