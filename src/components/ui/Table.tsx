/** A ruled table that scrolls inside its own frame on narrow screens; the frame can be reached and scrolled by keyboard. */
import type { ReactNode } from 'react';

export interface Column<Row> {
  id: string;
  title: ReactNode;
  /** Figures align right. */
  figure?: boolean;
  cell: (row: Row) => ReactNode;
}

export function Table<Row>({
  caption,
  captionHidden = true,
  columns,
  rows,
  rowKey,
}: {
  caption: string;
  captionHidden?: boolean;
  columns: readonly Column<Row>[];
  rows: readonly Row[];
  rowKey: (row: Row) => string;
}) {
  return (
    <div className="overflow-x-auto" role="region" aria-label={caption} tabIndex={0}>
      <table className="ruled">
        <caption className={captionHidden ? 'sr-only' : 'mb-2 text-left font-semibold'}>{caption}</caption>
        <thead>
          <tr>
            {columns.map((column) => (
              <th key={column.id} scope="col" className={column.figure ? 'figure' : ''}>
                {column.title}
              </th>
            ))}
          </tr>
        </thead>
        <tbody>
          {rows.map((row) => (
            <tr key={rowKey(row)}>
              {columns.map((column) => (
                <td key={column.id} className={column.figure ? 'figure' : ''}>
                  {column.cell(row)}
                </td>
              ))}
            </tr>
          ))}
        </tbody>
      </table>
    </div>
  );
}
