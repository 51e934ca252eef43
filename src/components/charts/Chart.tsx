/** The one themed wrapper round ECharts: the picture, its downloads, and the same data as a table. */
import { stringify } from 'csv-stringify/browser/esm/sync';
import EChartsReactCore from 'echarts-for-react/esm/core';
import { useMemo, useRef, useState } from 'react';
import { echarts } from '@/charts/echarts-modules.ts';
import { numberText } from '@/charts/number-text.ts';
import { renderSvg } from '@/charts/render-svg.ts';
import { saveFile } from '@/components/network/save-file.ts';
import type { FigureContent } from './figure.ts';
import { useChartTheme } from './use-chart-theme.ts';

const heightPx = 340;
const compactHeightPx = 210;
/** Rows shown on the page; the CSV has them all. */
const rowsShown = 500;

export default function Chart({ description, option, table, fileStem, compact = false }: FigureContent) {
  const theme = useChartTheme();
  const chart = useRef<EChartsReactCore>(null);
  const drawn = useMemo(() => option(theme), [option, theme]);
  const [open, setOpen] = useState(false);

  function savePng(): void {
    const url = chart.current
      ?.getEchartsInstance()
      .getDataURL({ type: 'png', pixelRatio: 3, backgroundColor: theme.panel });
    if (url === undefined) return;
    const bytes = Uint8Array.from(atob(url.slice(url.indexOf(',') + 1)), (character) => character.charCodeAt(0));
    saveFile(`${fileStem}.png`, 'image/png', bytes);
  }
  const saveSvg = (): void =>
    saveFile(`${fileStem}.svg`, 'image/svg+xml', renderSvg(option(theme), { widthPx: 900, heightPx: 420, theme }));
  function saveCsv(): void {
    const { columns, rows } = table();
    saveFile(`${fileStem}.csv`, 'text/csv', stringify([columns, ...rows]));
  }

  return (
    <figure>
      <div role="img" aria-label={description}>
        <EChartsReactCore
          ref={chart}
          echarts={echarts}
          option={drawn}
          notMerge
          style={{ height: compact ? compactHeightPx : heightPx }}
        />
      </div>
      <figcaption className="mt-1 flex flex-wrap items-center justify-between gap-x-4 gap-y-1 text-sm text-soft">
        <span>{description}</span>
        <span className="screen-only flex flex-wrap gap-x-4">
          {(
            [
              ['PNG', savePng],
              ['SVG', saveSvg],
              ['CSV', saveCsv],
            ] as const
          ).map(([format, save]) => (
            <button key={format} type="button" className="link py-1" onClick={save}>
              {format}
              <span className="sr-only"> of this figure</span>
            </button>
          ))}
          <button type="button" className="link py-1" aria-expanded={open} onClick={() => setOpen(!open)}>
            {open ? 'Hide the table' : 'As a table'}
          </button>
        </span>
      </figcaption>
      {open && <DataTable table={table} />}
    </figure>
  );
}

function DataTable({ table }: Pick<FigureContent, 'table'>) {
  const { caption, columns, rows } = useMemo(table, [table]);
  return (
    <div className="mt-3 max-h-96 overflow-auto border-y border-rule" role="region" aria-label={caption} tabIndex={0}>
      <table className="ruled">
        <caption className="sr-only">{caption}</caption>
        <thead className="sticky top-0 bg-paper">
          <tr>
            {columns.map((column) => (
              <th key={column} scope="col" className="figure pt-2">
                {column}
              </th>
            ))}
          </tr>
        </thead>
        <tbody>
          {rows.slice(0, rowsShown).map((row, index) => (
            <tr key={index}>
              {row.map((value, column) => (
                <td key={column} className="figure">
                  {typeof value === 'number' ? numberText(value, 5) : value}
                </td>
              ))}
            </tr>
          ))}
        </tbody>
      </table>
      {rows.length > rowsShown && (
        <p className="py-2 text-sm text-soft">{rows.length - rowsShown} more rows are in the CSV.</p>
      )}
    </div>
  );
}
