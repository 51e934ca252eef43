/** Sample traces of one observable: each replicate as the staircase that it is, one of them picked out. */
import type { EChartsOption } from 'echarts';
import type { FigureTable } from './figure-table.ts';
import { frame, labelSeries, timeTitle } from './frame.ts';
import { countText, numberText } from './number-text.ts';
import type { ChartTheme } from './palette.ts';

export interface TracesFigure {
  title: string;
  times: readonly number[];
  timeUnit?: string | undefined;
  traces: readonly { replicate: number; values: readonly number[] }[];
  /** Replicate number, from 0, that is drawn strongly. */
  highlighted: number | null;
}

export function tracesOption(figure: TracesFigure, theme: ChartTheme): EChartsOption {
  const { times, traces, highlighted } = figure;
  const end = times[times.length - 1]!;
  const series = traces.map(({ replicate, values }) => {
    const strong = replicate === highlighted;
    return {
      type: 'line',
      name: `replicate ${countText(replicate)}`,
      step: 'end',
      showSymbol: false,
      z: strong ? 4 : 2,
      lineStyle: {
        color: strong ? theme.ink : theme.bromo,
        width: strong ? 2 : 1,
        opacity: strong || highlighted === null ? 0.9 : 0.35,
      },
      itemStyle: { color: strong ? theme.ink : theme.bromo },
      data: times.map((time, index) => [time, values[index]!]),
    };
  });
  const picked = traces.find(({ replicate }) => replicate === highlighted);
  const labels =
    picked === undefined
      ? []
      : [
          {
            x: end,
            y: picked.values[times.length - 1]!,
            text: `replicate ${countText(picked.replicate)}`,
            color: theme.ink,
          },
        ];
  const base = frame(theme, {
    x: { title: timeTitle(figure.timeUnit), min: times[0]!, max: end },
    y: { title: `${figure.title}, count` },
    labels: true,
  });
  return {
    ...base,
    tooltip: {
      ...base.tooltip,
      formatter: (items: unknown) => {
        const at = (items as { dataIndex: number }[])[0]?.dataIndex;
        if (at === undefined) return '';
        const shown = picked === undefined ? traces.slice(0, 8) : [picked];
        return [
          `at ${numberText(times[at]!, 6)}${figure.timeUnit ? ` ${figure.timeUnit}` : ''}`,
          ...shown.map(({ replicate, values }) => `replicate ${countText(replicate)}  ${numberText(values[at]!, 6)}`),
        ].join('\n');
      },
    },
    series: [...series, labelSeries(labels, theme)],
  } as EChartsOption;
}

export function tracesTable({ title, times, timeUnit, traces }: TracesFigure): FigureTable {
  return {
    caption: `${title}: ${traces.length} sample traces`,
    columns: [timeTitle(timeUnit), ...traces.map(({ replicate }) => `replicate ${replicate}`)],
    rows: times.map((time, index) => [time, ...traces.map(({ values }) => values[index]!)]),
  };
}
