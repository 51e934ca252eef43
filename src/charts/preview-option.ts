/** A glance at a model while it is written: a few traces of one observable and the rate equation's curve. */
import type { EChartsOption } from 'echarts';
import type { FigureTable } from './figure-table.ts';
import { frame, timeTitle } from './frame.ts';
import { countText, numberText } from './number-text.ts';
import type { ChartTheme } from './palette.ts';

export interface PreviewFigure {
  title: string;
  times: readonly number[];
  timeUnit?: string | undefined;
  /** One row per replicate, on the times. */
  traces: readonly ArrayLike<number>[];
  meanField: readonly number[] | null;
}

export function previewOption({ title, times, timeUnit, traces, meanField }: PreviewFigure, theme: ChartTheme) {
  const line = (values: ArrayLike<number>) => times.map((time, index) => [time, values[index]!]);
  const base = frame(theme, {
    x: { title: timeTitle(timeUnit), min: times[0]!, max: times.at(-1)! },
    y: { title },
    labels: false,
  });
  return {
    ...base,
    tooltip: {
      ...base.tooltip,
      formatter: (items: unknown) => {
        const at = (items as { dataIndex: number }[])[0]?.dataIndex;
        if (at === undefined) return '';
        const values = traces.map((values) => values[at]!);
        return [
          `at ${numberText(times[at]!, 4)}${timeUnit ? ` ${timeUnit}` : ''}`,
          `${countText(values.length)} traces: ${numberText(Math.min(...values), 5)} – ${numberText(Math.max(...values), 5)}`,
          ...(meanField ? [`rate equation ${numberText(meanField[at]!, 5)}`] : []),
        ].join('\n');
      },
    },
    series: [
      ...traces.map((values, replicate) => ({
        type: 'line',
        name: `replicate ${countText(replicate)}`,
        step: 'end',
        showSymbol: false,
        silent: true,
        lineStyle: { color: theme.bromo, width: 1, opacity: 0.45 },
        itemStyle: { color: theme.bromo },
        data: line(values),
      })),
      ...(meanField
        ? [
            {
              type: 'line',
              name: 'rate equation',
              showSymbol: false,
              silent: true,
              z: 3,
              lineStyle: { color: theme.methyl, width: 2, type: [6, 4] },
              itemStyle: { color: theme.methyl },
              data: line(meanField),
            },
          ]
        : []),
    ],
  } as EChartsOption;
}

export function previewTable({ title, times, timeUnit, traces, meanField }: PreviewFigure): FigureTable {
  return {
    caption: `${title}: ${traces.length} preview traces`,
    columns: [
      timeTitle(timeUnit),
      ...(meanField ? ['rate equation'] : []),
      ...traces.map((_, replicate) => `replicate ${replicate}`),
    ],
    rows: times.map((time, at) => [
      time,
      ...(meanField ? [meanField[at]!] : []),
      ...traces.map((values) => values[at]!),
    ]),
  };
}
