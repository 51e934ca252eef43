/** One table of the model editor, typed into as into a spreadsheet: the empty row at its foot becomes a row when used. */
import { useVirtualizer } from '@tanstack/react-virtual';
import { ArrowDown, ArrowUp, ListPlus, Trash2 } from 'lucide-react';
import { useEffect, useId, useRef, useState, type ClipboardEvent, type KeyboardEvent, type ReactNode } from 'react';
import type { Problem } from '@/domain/network/document.ts';
import { cellsOfClipboard } from './change-draft.ts';
import type { GridName, Row } from './draft.ts';
import { GridCell } from './GridCell.tsx';
import { gridDescriptions, type GridColumn } from './grid-columns.ts';
import { nextCell, type CellPosition } from './grid-keys.ts';
import type { HistoryAction } from './draft-history.ts';
import type { CellPlace } from './written-document.ts';

export interface GridProps {
  grid: GridName;
  columns: readonly GridColumn[];
  rows: readonly Row[];
  /** The key that the next row will bear. */
  footKey: string;
  /** The gravest problem of each cell, by `key/column`. */
  problems: ReadonlyMap<string, Problem>;
  readOnly: boolean;
  /** A cell to go to, set by a link from the list of problems; `turn` makes the same place asked for twice two wishes. */
  goTo: { place: CellPlace; turn: number } | null;
  change: (action: HistoryAction) => void;
}

/** More rows than this are drawn only where they are on screen. */
const rowsDrawnWhole = 150;
const rowHeightPx = 37;

export function Grid({ grid, columns, rows, footKey, problems, readOnly, goTo, change }: GridProps) {
  const { title, row: rowWord, purpose } = gridDescriptions[grid];
  const frame = useRef<HTMLDivElement>(null);
  const tabOrigin = useRef<number | null>(null);
  const [current, setCurrent] = useState<string | null>(null);
  const id = useId();
  const shown: readonly Row[] = readOnly ? rows : [...rows, { key: footKey, cells: {} }];
  const windowed = useRowWindow(shown.length, frame);

  function focusCell({ row, column }: CellPosition): void {
    windowed.reveal(row);
    const find = () => frame.current?.querySelector<HTMLInputElement>(`[data-row="${row}"][data-column="${column}"]`);
    const land = (): void => {
      const control = find();
      control?.focus();
      if (control?.type === 'text') control.select();
    };
    if (find()) land();
    else requestAnimationFrame(() => requestAnimationFrame(land));
  }

  useEffect(() => {
    if (goTo === null || goTo.place.grid !== grid) return;
    const row = rows.findIndex(({ key }) => key === goTo.place.key);
    const column = columns.findIndex((known) => known.id === goTo.place.column);
    if (row >= 0) focusCell({ row, column: Math.max(0, column) });
    // The wish is carried out once, not again when rows change.
    // eslint-disable-next-line react-hooks/exhaustive-deps
  }, [goTo]);

  const positionOf = (target: EventTarget): CellPosition | null => {
    const { row, column } = (target as HTMLElement).dataset;
    return row === undefined || column === undefined ? null : { row: Number(row), column: Number(column) };
  };

  function onKeyDown(event: KeyboardEvent<HTMLElement>): void {
    const at = positionOf(event.target);
    if (at === null) return;
    const row = shown[at.row];
    if (event.altKey && (event.key === 'ArrowUp' || event.key === 'ArrowDown') && row && !readOnly) {
      event.preventDefault();
      const by = event.key === 'ArrowUp' ? -1 : 1;
      change({ kind: 'move', grid, key: row.key, by });
      const to = Math.min(rows.length - 1, Math.max(0, at.row + by));
      requestAnimationFrame(() => focusCell({ row: to, column: at.column }));
      return;
    }
    if (event.key === 'Tab') {
      tabOrigin.current = event.shiftKey ? null : (tabOrigin.current ?? at.column);
      return;
    }
    const size = { rows: shown.length, columns: columns.length };
    const next = nextCell(event, event.target as HTMLInputElement, at, size, tabOrigin.current);
    if (next === null) return;
    event.preventDefault();
    tabOrigin.current = null;
    focusCell(next);
  }

  function onPaste(event: ClipboardEvent<HTMLElement>): void {
    const at = positionOf(event.target);
    const matrix = cellsOfClipboard(event.clipboardData.getData('text/plain'));
    const row = at === null ? undefined : shown[at.row];
    if (at === null || row === undefined || matrix === null || readOnly) return;
    event.preventDefault();
    const place = { grid, key: row.key, column: columns[at.column]!.id };
    change({ kind: 'paste', place, columns: columns.map((column) => column.id), matrix });
  }

  const currentRow = rows.findIndex(({ key }) => key === current);

  return (
    <section aria-labelledby={`${id}-title`}>
      <div className="mb-1 flex min-h-9 flex-wrap items-center justify-between gap-x-4">
        <h2 id={`${id}-title`} className="text-lg font-semibold">
          {title}
          {rows.length > 0 && <span className="ml-2 text-sm font-normal text-soft">{rows.length}</span>}
        </h2>
        {!readOnly && rows.length > 0 && (
          <RowTools
            row={currentRow < 0 ? null : currentRow}
            last={rows.length - 1}
            word={rowWord}
            onInsert={(row) => {
              change({ kind: 'insert', grid, beforeKey: rows[row]!.key });
              requestAnimationFrame(() => focusCell({ row, column: 0 }));
            }}
            onMove={(row, by) => change({ kind: 'move', grid, key: rows[row]!.key, by })}
            onRemove={(row) => {
              change({ kind: 'remove', grid, key: rows[row]!.key });
              setCurrent(rows[row + 1]?.key ?? rows[row - 1]?.key ?? null);
            }}
          />
        )}
      </div>
      {rows.length === 0 && <p className="mb-1 text-sm text-soft">{purpose}</p>}
      <div
        ref={frame}
        className={`overflow-x-auto ${windowed.active ? 'max-h-[70vh] overflow-y-auto' : ''}`}
        onKeyDown={onKeyDown}
        onPaste={onPaste}
        onPointerDown={() => (tabOrigin.current = null)}
        onBlur={(event) => {
          const at = positionOf(event.target);
          const row = at === null ? undefined : shown[at.row];
          if (at === null || row === undefined || readOnly) return;
          if (columns[at.column]?.kind === 'equation') change({ kind: 'tidyEquation', key: row.key });
        }}
        onFocus={(event) => {
          const at = positionOf(event.target);
          if (at !== null) setCurrent(shown[at.row]?.key ?? null);
        }}
      >
        <table className="w-full min-w-max table-fixed border-collapse text-sm">
          <caption className="sr-only">
            {title}. {purpose}
          </caption>
          <thead>
            <tr>
              <th scope="col" className="w-9 border-b border-ink pb-1 text-right font-medium text-soft">
                <span className="sr-only">Row</span>
              </th>
              {columns.map((column) => (
                <th
                  key={column.id}
                  scope="col"
                  className={`${column.width} border-b border-ink px-2 pb-1 font-medium text-soft ${column.kind === 'number' ? 'text-right' : 'text-left'}`}
                >
                  {column.title}
                </th>
              ))}
            </tr>
          </thead>
          <tbody>
            {windowed.before}
            {windowed.indices.map((index) => {
              const row = shown[index]!;
              const atFoot = index === rows.length;
              return (
                <tr key={row.key} className="focus-within:bg-glass/50">
                  <td className="select-none border-b border-rule pr-1.5 text-right text-xs text-soft">
                    {atFoot ? <span aria-hidden="true">+</span> : index + 1}
                  </td>
                  {columns.map((column, columnIndex) => (
                    <GridCell
                      key={column.id}
                      column={column}
                      text={row.cells[column.id] ?? ''}
                      label={cellLabel(column, rowWord, index, atFoot, row)}
                      row={index}
                      columnIndex={columnIndex}
                      problem={problems.get(`${row.key}/${column.id}`)}
                      problemId={`${id}-${row.key}-${column.id}`}
                      atFoot={atFoot}
                      readOnly={readOnly}
                      grid={grid}
                      rowKey={row.key}
                      change={change}
                    />
                  ))}
                </tr>
              );
            })}
            {windowed.after}
          </tbody>
        </table>
      </div>
    </section>
  );
}

function cellLabel(column: GridColumn, word: string, index: number, atFoot: boolean, row: Row): string {
  if (atFoot) return `${column.title}, new ${word}`;
  const name = row.cells['id'] || row.cells['variable'];
  return `${column.title}, ${word} ${index + 1}${name && column.id !== 'id' ? ` (${name})` : ''}`;
}

/** What is done to a whole row, for the row that was last typed in. */
function RowTools(props: {
  row: number | null;
  last: number;
  word: string;
  onInsert: (row: number) => void;
  onMove: (row: number, by: -1 | 1) => void;
  onRemove: (row: number) => void;
}) {
  const { row, last, word } = props;
  const tool = (label: string, icon: ReactNode, enabled: boolean, act: (row: number) => void) => (
    <button
      type="button"
      aria-label={row === null ? label : `${label} ${word} ${row + 1}`}
      title={row === null ? `${label}: first choose a row` : `${label} ${word} ${row + 1}`}
      disabled={row === null || !enabled}
      onClick={() => row !== null && act(row)}
      className="flex h-9 w-9 items-center justify-center rounded-sm text-soft hover:bg-glass hover:text-ink disabled:opacity-40"
    >
      {icon}
    </button>
  );
  const icon = 'h-[1.125rem] w-[1.125rem]';
  return (
    <div role="group" aria-label={`Rows of ${word}`} className="flex">
      {tool('Insert above', <ListPlus aria-hidden="true" className={icon} />, true, props.onInsert)}
      {tool('Move up', <ArrowUp aria-hidden="true" className={icon} />, (row ?? 0) > 0, (at) => props.onMove(at, -1))}
      {tool('Move down', <ArrowDown aria-hidden="true" className={icon} />, (row ?? last) < last, (at) =>
        props.onMove(at, 1),
      )}
      {tool('Remove', <Trash2 aria-hidden="true" className={icon} />, true, props.onRemove)}
    </div>
  );
}

/** Which rows are drawn: all of a short grid, those on screen of a long one, with spacers for the rest. */
function useRowWindow(count: number, frame: React.RefObject<HTMLDivElement | null>) {
  const [mounted, setMounted] = useState(false);
  useEffect(() => setMounted(true), []);
  const active = count > rowsDrawnWhole;
  const virtualizer = useVirtualizer({
    count,
    enabled: active && mounted,
    getScrollElement: () => frame.current,
    estimateSize: () => rowHeightPx,
    overscan: 12,
  });
  if (!active || !mounted) {
    // The server draws the beginning of a long grid; the browser takes over from there.
    const length = Math.min(count, rowsDrawnWhole);
    return {
      active,
      indices: Array.from({ length }, (_, index) => index),
      before: null,
      after: null,
      reveal: () => {},
    };
  }
  const items = virtualizer.getVirtualItems();
  const spacer = (key: string, height: number): ReactNode =>
    height > 0 ? (
      <tr key={key} aria-hidden="true">
        <td style={{ height }} />
      </tr>
    ) : null;
  return {
    active,
    indices: items.map(({ index }) => index),
    before: spacer('before', items[0]?.start ?? 0),
    after: spacer('after', virtualizer.getTotalSize() - (items.at(-1)?.end ?? 0)),
    reveal: (row: number) => virtualizer.scrollToIndex(row, { align: 'auto' }),
  };
}
