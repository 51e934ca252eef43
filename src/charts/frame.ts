/** What all figures share: the frame of titled axes, quiet rules, and labels that stand beside what they name. */
import type { EChartsOption } from 'echarts';
import { numberText } from './number-text.ts';
import type { ChartTheme } from './palette.ts';

export interface Point {
  x: number;
  y: number;
}

/** A word beside a curve or band, at data coordinates. */
export interface DirectLabel extends Point {
  text: string;
  color: string;
}

export interface AxisText {
  /** With its unit: "time, h". */
  title: string;
  min?: number;
  max?: number;
}

/** Room to the right of the plot for direct labels, in pixels. */
const labelRoom = 96;

/** Grid, axes and tooltip; `series` are put in by each figure. Animation is off: a figure is read, not watched. */
export function frame(theme: ChartTheme, axes: { x: AxisText; y: AxisText; labels: boolean }): EChartsOption {
  const text = { color: theme.soft, fontFamily: theme.fontFamily, fontSize: 12 };
  const axisLabel = { ...text, formatter: (value: number) => numberText(value, 6), hideOverlap: true };
  return {
    animation: false,
    backgroundColor: 'transparent',
    textStyle: { fontFamily: theme.fontFamily, color: theme.ink },
    grid: { left: 8, right: axes.labels ? labelRoom : 16, top: 34, bottom: 30, containLabel: true },
    xAxis: {
      type: 'value',
      name: axes.x.title,
      nameLocation: 'middle',
      nameGap: 28,
      nameTextStyle: text,
      min: axes.x.min,
      max: axes.x.max,
      axisLine: { lineStyle: { color: theme.soft } },
      axisTick: { lineStyle: { color: theme.soft } },
      axisLabel,
      splitLine: { show: false },
    },
    yAxis: {
      type: 'value',
      name: axes.y.title,
      nameLocation: 'end',
      nameGap: 14,
      nameTextStyle: { ...text, align: 'left', padding: [0, 0, 0, -8] },
      min: axes.y.min,
      max: axes.y.max,
      axisLine: { show: false },
      axisTick: { show: false },
      axisLabel,
      splitLine: { lineStyle: { color: theme.rule } },
    },
    tooltip: {
      trigger: 'axis',
      // Drawn on the canvas: a box of HTML would need inline styles, which our security policy forbids.
      renderMode: 'richText',
      backgroundColor: theme.panel,
      borderColor: theme.rule,
      textStyle: { color: theme.ink, fontFamily: theme.fontFamily, fontSize: 12 },
      axisPointer: { type: 'line', lineStyle: { color: theme.soft, type: 'dashed' } },
      confine: true,
    },
  };
}

/** Words at the right end of curves, moved apart where they would cover each other. */
export function labelSeries(labels: DirectLabel[], theme: ChartTheme): object {
  return {
    type: 'scatter',
    name: 'labels',
    silent: true,
    symbolSize: 0.01,
    itemStyle: { opacity: 1 },
    tooltip: { show: false },
    clip: false,
    z: 10,
    labelLayout: stackedDown(),
    data: [...labels]
      .sort((one, other) => other.y - one.y)
      .map(({ x, y, text, color }) => ({
        value: [x, y],
        label: {
          show: true,
          position: 'right',
          distance: 6,
          formatter: () => text,
          color,
          fontFamily: theme.fontFamily,
          fontSize: 12,
          fontWeight: 600,
        },
      })),
  };
}

/** From the top down, each label is moved below the one above it where they would overlap. */
function stackedDown() {
  let bottomPx = -Infinity;
  return ({ dataIndex, labelRect }: { dataIndex: number; labelRect: { y: number; height: number } }) => {
    if (dataIndex === 0) bottomPx = -Infinity;
    const dy = Math.max(0, bottomPx + 2 - labelRect.y);
    bottomPx = labelRect.y + dy + labelRect.height;
    return { dy };
  };
}

interface CoordinateApi {
  coord(value: number[]): number[];
}

/** The area between two curves over the same x, as one polygon. */
export function bandSeries(band: {
  name: string;
  xs: readonly number[];
  low: readonly number[];
  high: readonly number[];
  color: string;
  opacity: number;
}): object {
  const { xs, low, high } = band;
  return {
    type: 'custom',
    name: band.name,
    silent: true,
    clip: true,
    z: 1,
    encode: { x: 0, y: [1, 2], tooltip: [] },
    data: xs.map((x, index) => [x, low[index], high[index]]),
    tooltip: { show: false },
    renderItem: (parameters: { dataIndexInside: number }, api: CoordinateApi) => {
      // One polygon for the whole band, drawn with its first point.
      if (parameters.dataIndexInside !== 0) return null;
      const upper = xs.map((x, index) => api.coord([x, high[index]!]));
      const lower = xs.map((x, index) => api.coord([x, low[index]!])).reverse();
      return {
        type: 'polygon',
        shape: { points: [...upper, ...lower] },
        style: { fill: band.color, opacity: band.opacity },
      };
    },
  };
}

/** "time, h" with the model's own word for its unit. */
export const timeTitle = (timeUnit: string | undefined): string =>
  timeUnit === undefined || timeUnit === '' ? "time, in the model's unit" : `time, ${timeUnit}`;
