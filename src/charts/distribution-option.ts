/** The distribution of an observable at one time over the replicates, as bars of probability with their intervals. */
import type { EChartsOption } from 'echarts';
import type { Distribution } from '@/engine/ensemble.ts';
import type { FigureTable } from './figure-table.ts';
import { frame, labelSeries } from './frame.ts';
import { countText, numberText } from './number-text.ts';
import type { ChartTheme } from './palette.ts';

export interface DistributionFigure {
  title: string;
  time: number;
  timeUnit?: string | undefined;
  distribution: Distribution;
  mean?: number | undefined;
}

export interface DistributionBar {
  /** Values from `from` up to and including `from + width − 1` where counts are whole numbers. */
  from: number;
  width: number;
  count: number;
}

/** More bars than this are no longer seen apart; neighbours are then joined. */
const mostBars = 160;
/** Interval whiskers are drawn while they can be told apart. */
const mostWhiskers = 60;

/**
 * The bars that are drawn: the counts as they are, or joined in equal whole-number widths when the range is too wide.
 * A bin that already has a width is put whole into the bar that holds its lowest value.
 */
export function barsOf({ values, widths, counts }: Distribution): DistributionBar[] {
  if (values.length === 0) return [];
  let [lowest, highest] = [Infinity, -Infinity];
  values.forEach((value, index) => {
    lowest = Math.min(lowest, value);
    highest = Math.max(highest, value + (widths[index] ?? 1));
  });
  const width = Math.ceil((highest - lowest) / mostBars);
  if (width <= 1) {
    return values.map((value, index) => ({ from: value, width: widths[index] ?? 1, count: counts[index]! }));
  }
  const bars = new Map<number, DistributionBar>();
  values.forEach((value, index) => {
    const from = lowest + Math.floor((value - lowest) / width) * width;
    const bar = bars.get(from);
    if (bar === undefined) bars.set(from, { from, width: Math.max(width, widths[index] ?? 1), count: counts[index]! });
    else {
      bar.count += counts[index]!;
      bar.width = Math.max(bar.width, widths[index] ?? 1);
    }
  });
  return [...bars.values()].sort((a, b) => a.from - b.from);
}

/** The 95 % interval of a probability after `count` of `total`: Wilson (1927). */
export function wilsonInterval(count: number, total: number): [low: number, high: number] {
  const z = 1.959963984540054;
  const share = count / total;
  const centre = share + (z * z) / (2 * total);
  const reach = z * Math.sqrt((share * (1 - share)) / total + (z * z) / (4 * total * total));
  const scale = 1 + (z * z) / total;
  // At the ends the bound is exact; rounding must not leave a crumb.
  return [
    count === 0 ? 0 : Math.max(0, (centre - reach) / scale),
    count === total ? 1 : Math.min(1, (centre + reach) / scale),
  ];
}

/** Whether the figure has room for the intervals of its bars. */
export const showsIntervals = (distribution: Distribution): boolean => barsOf(distribution).length <= mostWhiskers;

interface RenderApi {
  coord(value: number[]): [number, number];
}

export function distributionOption(figure: DistributionFigure, theme: ChartTheme): EChartsOption {
  const bars = barsOf(figure.distribution);
  const total = bars.reduce((sum, { count }) => sum + count, 0);
  const joined = bars.some(({ width }) => width !== 1);
  const heights = bars.map(({ count, width }) => count / total / width);
  const whiskers = bars.map(({ count, width }) => wilsonInterval(count, total).map((bound) => bound / width));
  const withWhiskers = showsIntervals(figure.distribution);
  const top = Math.max(...heights, ...(withWhiskers ? whiskers.map(([, high]) => high!) : [0]));
  const first = bars[0]?.from ?? 0;
  const end = bars.reduce((most, { from, width }) => Math.max(most, from + width), first + 1);

  const barSeries = {
    type: 'custom',
    name: 'replicates',
    encode: { x: 0, y: 1 },
    z: 2,
    data: bars.map(({ from }, index) => [from, heights[index]!]),
    renderItem: ({ dataIndex: index }: { dataIndex: number }, api: RenderApi) => {
      const { from, width } = bars[index]!;
      const [left, upper] = api.coord([from - 0.5, heights[index]!]);
      const [right, base] = api.coord([from - 0.5 + width, 0]);
      const middle = (left + right) / 2;
      const [low, high] = whiskers[index]!.map((bound) => api.coord([from, bound])[1]) as [number, number];
      const gap = right - left > 6 ? 1 : 0;
      const bar = {
        type: 'rect',
        shape: { x: left + gap / 2, y: upper, width: Math.max(right - left - gap, 0.75), height: base - upper },
        style: { fill: theme.bromo, opacity: 0.75 },
      };
      const whisker = {
        type: 'line',
        shape: { x1: middle, y1: low, x2: middle, y2: high },
        style: { stroke: theme.ink, lineWidth: 1.25 },
      };
      return { type: 'group', children: withWhiskers ? [bar, whisker] : [bar] };
    },
  };
  const meanLine =
    figure.mean === undefined
      ? []
      : [
          {
            type: 'line',
            name: 'mean',
            silent: true,
            showSymbol: false,
            tooltip: { show: false },
            z: 3,
            lineStyle: { color: theme.ink, width: 1.5, type: [4, 3] },
            data: [
              [figure.mean, 0],
              [figure.mean, top],
            ],
          },
          labelSeries([{ x: figure.mean, y: top, text: 'mean', color: theme.ink }], theme),
        ];
  const base = frame(theme, {
    x: { title: `${figure.title} at ${timeText(figure)}, count`, min: first - 0.5, max: end - 0.5 },
    y: { title: joined ? 'probability per count' : 'probability', min: 0 },
    labels: false,
  });
  return {
    ...base,
    xAxis: { ...base.xAxis, axisLabel: { ...labelOf(base), formatter: wholeOnly } },
    tooltip: {
      ...base.tooltip,
      trigger: 'item',
      formatter: (item: unknown) => {
        const index = (item as { dataIndex: number }).dataIndex;
        const bar = bars[index];
        if (bar === undefined) return '';
        const [low, high] = wilsonInterval(bar.count, total);
        return `${rangeText(bar)}\n${countText(bar.count)} of ${countText(total)} replicates\n${numberText(bar.count / total, 3)}  (95 %: ${numberText(low, 3)} – ${numberText(high, 3)})`;
      },
    },
    series: [barSeries, ...meanLine],
  } as EChartsOption;
}

const labelOf = (option: EChartsOption): object => (option.xAxis as { axisLabel: object }).axisLabel;
/** The half counts at the ends of the axis are not labelled. */
const wholeOnly = (value: number): string => (Number.isInteger(value) ? numberText(value, 6) : '');

const timeText = ({ time, timeUnit }: DistributionFigure): string =>
  `${numberText(time, 6)}${timeUnit ? ` ${timeUnit}` : ''}`;

const rangeText = ({ from, width }: DistributionBar): string =>
  width === 1 ? `count ${countText(from)}` : `counts ${countText(from)} to ${countText(from + width - 1)}`;

export function distributionTable(figure: DistributionFigure): FigureTable {
  const { values, widths, counts } = figure.distribution;
  const total = counts.reduce((sum, count) => sum + count, 0);
  return {
    caption: `${figure.title} at ${timeText(figure)}, ${countText(total)} replicates`,
    columns: ['count from', 'width', 'replicates', 'probability', '95 % low', '95 % high'],
    rows: values.map((value, index) => {
      const [low, high] = wilsonInterval(counts[index]!, total);
      return [value, widths[index] ?? 1, counts[index]!, counts[index]! / total, low, high];
    }),
  };
}
