/** One number over the points of a sweep: curves with 95 % intervals along one quantity, or a heat map over two. */
import type { EChartsOption } from 'echarts';
import type { FigureTable } from './figure-table.ts';
import { frame, labelSeries } from './frame.ts';
import { countText, numberText } from './number-text.ts';
import { seriesDashes, type ChartTheme } from './palette.ts';

export interface SweepValue {
  value: number;
  lower: number | null;
  upper: number | null;
}

export interface SweepCurve {
  /** Empty for a single one. */
  name: string;
  points: (SweepValue & { x: number })[];
}

export interface SweepCurves {
  /** What is drawn, as the axis says it. */
  title: string;
  /** The quantity along the axis. */
  along: string;
  replicates: number;
  curves: SweepCurve[];
  /** Points that lie anywhere: no line between them. */
  scattered: boolean;
}

/** From this ratio on, positive values of an axis stand on a logarithmic one. */
const logRatio = 30;

export function sweepCurvesOption(figure: SweepCurves, theme: ChartTheme): EChartsOption {
  const { title, along, replicates, curves, scattered } = figure;
  const xs = curves.flatMap(({ points }) => points.map(({ x }) => x));
  const [least, most] = [Math.min(...xs), Math.max(...xs)];
  const isLog = least > 0 && most / least >= logRatio;
  const base = frame(theme, { x: { title: along }, y: { title }, labels: curves.length > 1 });
  const lows = curves.flatMap(({ points }) => points.map(({ value, lower }) => lower ?? value));
  const colorOf = (place: number): string => theme.series[place % theme.series.length]!;
  const words = ({ value, lower, upper }: SweepValue): string =>
    `${numberText(value, 5)}${lower === null || upper === null ? '' : ` (95 %: ${numberText(lower, 5)} – ${numberText(upper, 5)})`}`;
  return {
    ...base,
    xAxis: { ...base.xAxis, type: isLog ? 'log' : 'value', scale: true },
    yAxis: { ...base.yAxis, ...(Math.min(...lows) >= 0 ? { min: 0 } : {}) },
    tooltip: {
      ...base.tooltip,
      trigger: 'item',
      formatter: (item: unknown) => {
        const { seriesIndex = 0, dataIndex = 0 } = item as { seriesIndex?: number; dataIndex?: number };
        const curve = curves[Math.floor(seriesIndex / 2)];
        const point = curve?.points[dataIndex];
        if (!curve || !point) return '';
        const name = curve.name ? [curve.name] : [];
        return [
          ...name,
          `${along} ${numberText(point.x, 5)}`,
          words(point),
          `from ${countText(replicates)} replicates`,
        ].join('\n');
      },
    },
    series: [
      ...curves.flatMap(({ name, points }, place) => {
        const color = colorOf(place);
        return [
          {
            type: 'line',
            name: name || title,
            showSymbol: true,
            symbol: 'circle',
            symbolSize: 7,
            z: 4,
            lineStyle: { color, width: scattered ? 0 : 2, type: seriesDashes[place % seriesDashes.length] },
            itemStyle: { color },
            data: points.map(({ x, value }) => [x, value]),
          },
          intervals(points, color),
        ];
      }),
      labelSeries(
        curves.length < 2
          ? []
          : curves.flatMap(({ name, points }, place) => {
              const last = points.at(-1);
              return last ? [{ x: last.x, y: last.value, text: name, color: colorOf(place) }] : [];
            }),
        theme,
      ),
    ],
  } as EChartsOption;
}

interface Coordinates {
  value(dimension: number): number;
  coord(value: number[]): number[];
}

/** A vertical bar from the lower to the upper end of each interval. */
function intervals(points: SweepCurve['points'], color: string): object {
  return {
    type: 'custom',
    name: '95 % interval',
    silent: true,
    z: 3,
    encode: { x: 0, y: [1, 2] },
    data: points.map(({ x, value, lower, upper }) => [x, lower ?? value, upper ?? value]),
    renderItem: (_: unknown, api: Coordinates) => {
      const [x, low] = api.coord([api.value(0), api.value(1)]) as [number, number];
      const high = api.coord([api.value(0), api.value(2)])[1]!;
      const line = (x1: number, y1: number, x2: number, y2: number) => ({
        type: 'line',
        shape: { x1, y1, x2, y2 },
        style: { stroke: color, lineWidth: 1.5 },
      });
      return {
        type: 'group',
        children: [line(x, low, x, high), line(x - 4, low, x + 4, low), line(x - 4, high, x + 4, high)],
      };
    },
  };
}

export interface SweepMap {
  title: string;
  x: { title: string; values: readonly number[] };
  y: { title: string; values: readonly number[] };
  replicates: number;
  /** cells[y][x]; null where the number does not exist. */
  cells: (SweepValue | null)[][];
}

/** More cells are too small for their numbers. */
const labelledMost = 90;

export function sweepMapOption(figure: SweepMap, theme: ChartTheme): EChartsOption {
  const { title, x, y, cells, replicates } = figure;
  const known = cells.flat().flatMap((cell) => (cell ? [cell.value] : []));
  const [least, most] = [Math.min(...known), Math.max(...known)];
  const share = (value: number): number => (most > least ? (value - least) / (most - least) : 0.5);
  const base = frame(theme, { x: { title: x.title }, y: { title: y.title }, labels: false });
  const category = (values: readonly number[]) => ({
    type: 'category' as const,
    data: values.map((value) => numberText(value, 4)),
    splitLine: { show: false },
  });
  const labelled = x.values.length * y.values.length <= labelledMost;
  return {
    ...base,
    xAxis: {
      ...base.xAxis,
      ...category(x.values),
      min: undefined,
      max: undefined,
      axisLabel: { color: theme.soft, fontFamily: theme.fontFamily, hideOverlap: true },
    },
    yAxis: {
      ...base.yAxis,
      ...category(y.values),
      min: undefined,
      max: undefined,
      axisLabel: { color: theme.soft, fontFamily: theme.fontFamily },
    },
    tooltip: {
      ...base.tooltip,
      trigger: 'item',
      formatter: (item: unknown) => {
        const { data } = item as { data: [number, number] };
        const cell = cells[data[1]]![data[0]];
        const interval =
          cell?.lower == null || cell.upper == null
            ? []
            : [`95 %: ${numberText(cell.lower, 5)} – ${numberText(cell.upper, 5)}`];
        return [
          `${x.title} ${numberText(x.values[data[0]]!, 5)}, ${y.title} ${numberText(y.values[data[1]]!, 5)}`,
          `${title}: ${cell ? numberText(cell.value, 5) : 'does not exist'}`,
          ...interval,
          `from ${countText(replicates)} replicates`,
        ].join('\n');
      },
    },
    series: [
      {
        type: 'custom',
        name: title,
        data: cells.flatMap((row, at) => row.map((_, column) => [column, at])),
        renderItem: (_: unknown, api: Coordinates & { size(value: number[]): number[] }) => {
          const [column, row] = [api.value(0), api.value(1)];
          const cell = cells[row]![column];
          const [cx, cy] = api.coord([column, row]) as [number, number];
          const [width, height] = api.size([1, 1]) as [number, number];
          const shape = { x: cx - width / 2, y: cy - height / 2, width: width - 1, height: height - 1 };
          if (!cell) return { type: 'rect', shape, style: { fill: 'none', stroke: theme.rule } };
          const part = share(cell.value);
          return {
            type: 'group',
            children: [
              // Colours of a page come in any notation, so they are laid over each other and not computed.
              { type: 'rect', shape, style: { fill: theme.glass } },
              { type: 'rect', shape, style: { fill: theme.bromo, opacity: part } },
              ...(labelled
                ? [
                    {
                      type: 'text',
                      silent: true,
                      style: {
                        text: numberText(cell.value, 3),
                        x: cx,
                        y: cy,
                        align: 'center',
                        verticalAlign: 'middle',
                        fontFamily: theme.fontFamily,
                        fontSize: 12,
                        fill: part > 0.55 ? theme.paper : theme.ink,
                      },
                    },
                  ]
                : []),
            ],
          };
        },
      },
    ],
  } as EChartsOption;
}

/** Every point, whatever part of them is drawn. */
export function sweepTable(figure: {
  title: string;
  replicates: number;
  targets: string[];
  values: readonly (readonly number[])[];
  found: readonly (SweepValue | null)[];
}): FigureTable {
  const { title, replicates, targets, values, found } = figure;
  return {
    caption: `${title} at each point, with 95 % intervals, from ${countText(replicates)} replicates each`,
    columns: ['point', ...targets, title, '95 % lower', '95 % upper'],
    rows: values.map((row, point) => {
      const cell = found[point];
      return [point, ...row, cell?.value ?? '', cell?.lower ?? '', cell?.upper ?? ''];
    }),
  };
}
