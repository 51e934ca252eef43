/** One cell of a grid: a field that looks like paper, with its problem tied to it. */
import { memo } from 'react';
import type { Problem } from '@/domain/network/document.ts';
import type { HistoryAction } from './draft-history.ts';
import { ticked, type GridName } from './draft.ts';
import type { GridColumn } from './grid-columns.ts';

export interface GridCellProps {
  column: GridColumn;
  text: string;
  /** "Initial count, species 3 (E)". */
  label: string;
  row: number;
  columnIndex: number;
  problem: Problem | undefined;
  problemId: string;
  atFoot: boolean;
  readOnly: boolean;
  grid: GridName;
  rowKey: string;
  change: (action: HistoryAction) => void;
}

const fieldClass =
  'block h-9 w-full rounded-none border-0 bg-transparent px-2 text-sm text-ink placeholder:italic placeholder:text-soft ' +
  'focus-visible:bg-panel focus-visible:outline focus-visible:outline-2 focus-visible:-outline-offset-2 focus-visible:outline-bromo';

const marks = { error: '✕', warning: '▲', information: '' } as const;

export const GridCell = memo(function GridCell(props: GridCellProps) {
  const { column, text, label, row, columnIndex, problem, problemId, atFoot, readOnly, grid, rowKey, change } = props;
  const onText = (value: string): void =>
    change({ kind: 'cell', place: { grid, key: rowKey, column: column.id }, text: value });
  const loud = problem !== undefined && problem.severity !== 'information' ? problem : undefined;
  const wiring = {
    'aria-label': label,
    'aria-invalid': loud?.severity === 'error' ? (true as const) : undefined,
    'aria-describedby': loud ? problemId : undefined,
    'data-row': row,
    'data-column': columnIndex,
    title: loud?.message,
  };
  return (
    <td className="relative border-b border-rule p-0 align-middle">
      {column.kind === 'tick' ? (
        <span className="flex h-9 items-center px-2">
          <input
            {...wiring}
            type="checkbox"
            checked={text === ticked}
            disabled={readOnly}
            onChange={(event) => onText(event.target.checked ? ticked : '')}
            className="h-4 w-4 accent-ink"
          />
        </span>
      ) : column.kind === 'choice' && !atFoot ? (
        <select
          {...wiring}
          value={text}
          disabled={readOnly}
          onChange={(event) => onText(event.target.value)}
          className={fieldClass}
        >
          {column.choices?.map((choice) => (
            <option key={choice} value={choice}>
              {choice}
            </option>
          ))}
        </select>
      ) : column.kind === 'choice' ? (
        <span className="flex h-9 items-center px-2 text-sm italic text-soft" aria-hidden="true">
          {column.choices?.[0]}
        </span>
      ) : (
        <input
          {...wiring}
          type="text"
          value={text}
          readOnly={readOnly}
          spellCheck={false}
          autoComplete="off"
          autoCapitalize="off"
          inputMode={column.kind === 'number' ? 'decimal' : 'text'}
          placeholder={atFoot ? column.example : undefined}
          onChange={(event) => onText(event.target.value)}
          className={`${fieldClass} ${column.kind === 'number' ? 'text-right' : ''}`}
        />
      )}
      {loud && (
        <>
          <span
            aria-hidden="true"
            className={`pointer-events-none absolute inset-x-0 bottom-0 border-b-2 ${loud.severity === 'error' ? 'border-congo text-congo' : 'border-methyl text-methyl'}`}
          >
            <span className="absolute bottom-0 right-0.5 text-[0.6rem] leading-4">{marks[loud.severity]}</span>
          </span>
          <span id={problemId} className="sr-only">
            {loud.message}
          </span>
        </>
      )}
    </td>
  );
});
