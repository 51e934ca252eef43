/** How the share of replicates that have passed grows over time, with its score interval. */
import type { EChartsOption } from 'echarts';
import type { FigureTable } from './figure-table.ts';
import { bandSeries, frame, labelSeries, timeTitle } from './frame.ts';
import { countText, numberText } from './number-text.ts';
import type { ChartTheme } from './palette.ts';

export interface PassageFigure {
  title: string;
  times: readonly number[];
  timeUnit?: string | undefined;
  replicates: number;
  curve: { probability: readonly number[]; lower: readonly number[]; upper: readonly number[] };
}

export function passageOption({ title, times, timeUnit, curve, replicates }: PassageFigure, theme: ChartTheme) {
  const end = times.at(-1)!;
  const base = frame(theme, {
    x: { title: timeTitle(timeUnit), min: times[0]!, max: end },
    y: { title: `P(${title} by then)`, min: 0, max: 1 },
    labels: true,
  });
  return {
    ...base,
    tooltip: {
      ...base.tooltip,
      formatter: (items: unknown) => {
        const at = (items as { dataIndex: number }[])[0]?.dataIndex;
        if (at === undefined) return '';
        return [
          `by ${numberText(times[at]!, 4)}${timeUnit ? ` ${timeUnit}` : ''}`,
          `P = ${numberText(curve.probability[at]!, 4)}`,
          `95 %: ${numberText(curve.lower[at]!, 4)} – ${numberText(curve.upper[at]!, 4)}`,
          `from ${countText(replicates)} replicates`,
        ].join('\n');
      },
    },
    series: [
      bandSeries({
        name: '95 % interval',
        xs: times,
        low: [...curve.lower],
        high: [...curve.upper],
        color: theme.bromo,
        opacity: 0.25,
      }),
      {
        type: 'line',
        name: 'passed',
        showSymbol: false,
        z: 4,
        lineStyle: { color: theme.bromo, width: 2.25 },
        itemStyle: { color: theme.bromo },
        data: times.map((time, at) => [time, curve.probability[at]!]),
      },
      labelSeries([{ x: end, y: curve.probability.at(-1)!, text: 'passed', color: theme.bromo }], theme),
    ],
  } as EChartsOption;
}

export function passageTable({ title, times, timeUnit, curve, replicates }: PassageFigure): FigureTable {
  return {
    caption: `P(${title} by then), from ${countText(replicates)} replicates`,
    columns: [timeTitle(timeUnit), 'probability', '95 % lower', '95 % upper'],
    rows: times.map((time, at) => [time, curve.probability[at]!, curve.lower[at]!, curve.upper[at]!]),
  };
}
