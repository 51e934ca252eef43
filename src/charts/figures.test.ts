import { expect, it, describe } from 'vitest';
import type { Distribution } from '@/engine/ensemble.ts';
import { barsOf, distributionOption, distributionTable, wilsonInterval } from './distribution-option.ts';
import { meansOption, meansTable } from './means-option.ts';
import { darkTheme, lightTheme } from './palette.ts';
import { renderSvg } from './render-svg.ts';
import { timeCourseOption, timeCourseTable, type TimeCourse } from './time-course-option.ts';
import { tracesOption, tracesTable } from './traces-option.ts';

const size = { widthPx: 640, heightPx: 320 };
const times = Array.from({ length: 13 }, (_, index) => index * 4);
/** Immigration-death from 0 with mean 60 (1 − e^(−t/10)): mean = variance (Poisson law, from memory). */
const mean = times.map((time) => 60 * (1 - Math.exp(-time / 10)));
const around = (reach: number) => mean.map((value) => Math.max(0, Math.round(value + reach * Math.sqrt(value))));
const observable = {
  id: 'A',
  name: 'Repressor A',
  mean,
  sd: mean.map(Math.sqrt),
  meanStandardError: mean.map((value) => Math.sqrt(value / 400)),
  sdStandardError: mean.map((value) => Math.sqrt(value / 800)),
  quantiles: {
    '0.05': around(-1.64),
    '0.25': around(-0.67),
    '0.5': around(0),
    '0.75': around(0.67),
    '0.95': around(1.64),
  },
};
const trace = (replicate: number) => ({
  replicate,
  values: mean.map((value, index) => Math.max(0, Math.round(value + ((index * (replicate + 3)) % 7) - 3))),
});
const course: TimeCourse = {
  times,
  timeUnit: 'h',
  observable,
  replicates: 400,
  fan: true,
  traces: [trace(0), trace(1)],
};
const distribution: Distribution = { values: [4, 5, 6, 8], widths: [1, 1, 1, 1], counts: [10, 40, 30, 20] };
const atTime = { title: 'Repressor A', time: 48, timeUnit: 'h', distribution, mean: 5.7 };

/** Ids that the renderer numbers through the life of the process. */
const stable = (svg: string): string => svg.replaceAll(/zr\d+-c/g, 'zr-c').replaceAll(/zr\d+/g, 'zr');
/** Labels are functions in the option; the picture is what is compared. */
const pictureOf = (option: Parameters<typeof renderSvg>[0], theme = lightTheme): string =>
  stable(renderSvg(option, { ...size, theme })).replaceAll('><', '>\n<');

describe('the time course', () => {
  it('looks as it did, light', async () => {
    await expect(pictureOf(timeCourseOption(course, lightTheme))).toMatchFileSnapshot(
      'snapshots/time-course-light.svg',
    );
  });
  it('looks as it did, dark and without the fan', async () => {
    const option = timeCourseOption({ ...course, fan: false, traces: [] }, darkTheme);
    await expect(pictureOf(option, darkTheme)).toMatchFileSnapshot('snapshots/time-course-dark.svg');
  });
  it('draws the mean field dashed and names it, in the picture and in the table', async () => {
    const withCurve = { ...course, traces: [], meanField: mean.map((value) => value * 1.1) };
    const svg = pictureOf(timeCourseOption(withCurve, lightTheme));
    await expect(svg).toMatchFileSnapshot('snapshots/time-course-mean-field.svg');
    expect(svg).toContain('rate equation');
    const { columns, rows } = timeCourseTable(withCurve);
    expect(rows[12]![columns.indexOf('rate equation')]).toBeCloseTo(mean[12]! * 1.1, 12);
  });
  it('moves labels apart that would cover each other', () => {
    const same = { ...observable, quantiles: { ...observable.quantiles, '0.75': mean } };
    const svg = pictureOf(timeCourseOption({ ...course, observable: same, meanField: mean }, lightTheme));
    const placed = ['mean ± SE', '25–75 %', 'rate equation'].map((words) =>
      Number(new RegExp(`translate\\(\\S+ (\\S+)\\)"[^>]*>${words}<`).exec(svg)![1]),
    );
    placed.sort((a, b) => a - b);
    expect(placed[1]! - placed[0]!).toBeGreaterThanOrEqual(12);
    expect(placed[2]! - placed[1]!).toBeGreaterThanOrEqual(12);
  });
  it('names both axes with their units and every band beside it', () => {
    const svg = pictureOf(timeCourseOption(course, lightTheme));
    for (const words of ['time, h', 'Repressor A, count', 'mean ± SE', '5–95 %', '25–75 %'])
      expect(svg).toContain(words);
  });
  it('gives every number it draws to its table', () => {
    const table = timeCourseTable(course);
    expect(table.rows).toHaveLength(times.length);
    expect(table.columns).toHaveLength(table.rows[0]!.length);
    expect(table.rows[12]![1]).toBe(mean[12]);
  });
});

it('several means are told apart by dashes as well as by colour', async () => {
  const observables = ['A', 'B', 'C'].map((id, index) => ({
    ...observable,
    id,
    name: undefined,
    mean: mean.map((value) => value / (index + 1)),
  }));
  const means = { times, timeUnit: 'h', observables, replicates: 400 };
  const svg = pictureOf(meansOption(means, lightTheme));
  await expect(svg).toMatchFileSnapshot('snapshots/means-light.svg');
  expect(svg).toContain('stroke-dasharray');
  expect(meansTable(means).columns).toHaveLength(7);
});

describe('the distribution', () => {
  it('looks as it did', async () => {
    await expect(pictureOf(distributionOption(atTime, lightTheme))).toMatchFileSnapshot(
      'snapshots/distribution-light.svg',
    );
  });
  it('joins neighbours when there are more counts than can be seen apart, losing none', () => {
    const values = Array.from({ length: 1_000 }, (_, index) => index);
    const bars = barsOf({ values, widths: values.map(() => 1), counts: values.map((value) => value % 3) });
    expect(bars.length).toBeLessThanOrEqual(160);
    expect(bars.reduce((sum, { count }) => sum + count, 0)).toBe(values.reduce((sum, value) => sum + (value % 3), 0));
  });
  it('states Wilson intervals (Wilson 1927; 10 of 100 gives 0.0552 to 0.1744, from memory, recomputed)', () => {
    const [low, high] = wilsonInterval(10, 100);
    expect(low).toBeCloseTo(0.0552, 4);
    expect(high).toBeCloseTo(0.1744, 4);
    expect(wilsonInterval(0, 50)[0]).toBe(0);
    expect(wilsonInterval(50, 50)[1]).toBe(1);
  });
  it('has probabilities in its table that add to one', () => {
    const { rows } = distributionTable(atTime);
    expect(rows.reduce((sum, row) => sum + Number(row[3]), 0)).toBeCloseTo(1, 12);
  });
  it('draws an empty distribution as an empty frame', () => {
    const empty = { ...atTime, distribution: { values: [], widths: [], counts: [] }, mean: undefined };
    expect(pictureOf(distributionOption(empty, lightTheme))).toContain('probability');
  });
});

it('sample traces are staircases with the picked one named', async () => {
  const figure = { title: 'Repressor A', times, timeUnit: undefined, traces: [trace(0), trace(4)], highlighted: 4 };
  const svg = pictureOf(tracesOption(figure, lightTheme));
  await expect(svg).toMatchFileSnapshot('snapshots/traces-light.svg');
  expect(svg).toContain('replicate 4');
  expect(tracesTable(figure).rows[0]).toHaveLength(3);
});
