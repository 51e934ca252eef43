import { describe, expect, it } from 'vitest';
import { lightTheme } from '@/charts/palette.ts';
import { renderSvg } from '@/charts/render-svg.ts';
import { sweepCurvesOption, sweepMapOption, sweepTable } from '@/charts/sweep-option.ts';
import type { Sweep } from '@/domain/jobs/sweep.ts';
import { immigrationDeath } from '@tests/support/jobs.ts';
import { axisValues, curvesAlong, mapOf } from './sweep-figures.ts';
import { firstAxis, noSweep, readSweepSettings, sweepSettingsOf, targetsOf } from './sweep-settings.ts';

const network = immigrationDeath();
const sweep: Sweep = {
  kind: 'grid',
  targets: [
    { kind: 'parameter', id: 'birth' },
    { kind: 'initial_count', id: 'X' },
  ],
  values: [1, 2, 3].flatMap((birth) => [0, 50].map((count) => [birth, count])),
};
const found = sweep.values.map(([birth, count]) => ({
  value: birth! + count!,
  lower: birth!,
  upper: 2 * birth! + count!,
}));
const choice = { sweep, found, along: 0, across: 1, held: [] };
const names = ['birth', 'initial_count:X'];

describe('the sweep builder', () => {
  it('offers what a point can set and reads axes, ranges and pasted tables', () => {
    expect(targetsOf(network).map(({ name }) => name)).toEqual(['birth', 'death', 'initial_count:X']);
    const axis = { ...firstAxis('birth'), values: '1, 2; 3' };
    const read = readSweepSettings({ ...noSweep, kind: 'grid', axes: [axis] }, network);
    expect(read).toMatchObject({ ok: true, sweep: { values: [[1], [2], [3]] } });
    const list = 'birth\tinitial_count:X\n1\t5\n2\t6\n';
    expect(readSweepSettings({ ...noSweep, kind: 'list', list }, network)).toMatchObject({
      ok: true,
      sweep: {
        kind: 'list',
        values: [
          [1, 5],
          [2, 6],
        ],
      },
    });
    const spread = readSweepSettings(
      {
        ...noSweep,
        kind: 'latin_hypercube',
        count: '8',
        axes: [{ ...firstAxis('death'), from: '0.1', to: '10', spacing: 'log' }],
      },
      network,
    );
    expect(spread.ok && spread.sweep?.values).toHaveLength(8);
  });

  it('puts each fault beside its field', () => {
    const faultsOf = (more: Parameters<typeof readSweepSettings>[0]) => {
      const read = readSweepSettings(more, network);
      return read.ok ? [] : Object.keys(read.faults);
    };
    expect(faultsOf({ ...noSweep, kind: 'grid' })).toEqual(['sweep']);
    expect(faultsOf({ ...noSweep, kind: 'grid', axes: [firstAxis('birth')] })).toEqual(['sweep.axes[0].values']);
    const range = { ...firstAxis('birth'), spacing: 'log' as const, from: '0', to: '1', count: '3' };
    expect(faultsOf({ ...noSweep, kind: 'grid', axes: [range] })).toEqual(['sweep.axes[0].from']);
    expect(faultsOf({ ...noSweep, kind: 'list', list: 'brith\n1' })).toEqual(['sweep.list']);
    expect(faultsOf({ ...noSweep, kind: 'list', list: 'birth\n1 2' })).toEqual(['sweep.list']);
  });

  it('shows the sweep of an earlier job point by point, as the same points', () => {
    const read = readSweepSettings(sweepSettingsOf({ sweep }), network);
    expect(read.ok && read.sweep?.values).toEqual(sweep.values);
  });
});

describe('figures of a sweep', () => {
  it('have a curve for each value of the second quantity, and a cell for each pair', () => {
    expect(axisValues(sweep, 1)).toEqual([0, 50]);
    expect(
      curvesAlong(choice, names).map(({ name, points }) => [name, points.map(({ x, value }) => [x, value])]),
    ).toEqual([
      [
        'initial_count:X 0',
        [
          [1, 1],
          [2, 2],
          [3, 3],
        ],
      ],
      [
        'initial_count:X 50',
        [
          [1, 51],
          [2, 52],
          [3, 53],
        ],
      ],
    ]);
    expect(mapOf(choice, names).cells[1]!.map((cell) => cell?.value)).toEqual([51, 52, 53]);
  });

  it('are drawn with their intervals, numbers and titles', () => {
    const size = { widthPx: 640, heightPx: 320, theme: lightTheme };
    const curves = sweepCurvesOption(
      { title: 'Mean of X', along: 'birth', replicates: 100, curves: curvesAlong(choice, names), scattered: false },
      lightTheme,
    );
    const drawn = renderSvg(curves, size);
    for (const words of ['Mean of X', 'birth', 'initial_count:X 50']) expect(drawn).toContain(words);
    const map = renderSvg(
      sweepMapOption({ title: 'Mean of X', replicates: 100, ...mapOf(choice, names) }, lightTheme),
      size,
    );
    for (const words of ['>53<', '>1<', 'initial_count:X']) expect(map).toContain(words);
    const { columns, rows } = sweepTable({
      title: 'Mean',
      replicates: 100,
      targets: names,
      values: sweep.values,
      found,
    });
    expect(columns).toEqual(['point', ...names, 'Mean', '95 % lower', '95 % upper']);
    expect(rows[5]).toEqual([5, 3, 50, 53, 3, 56]);
  });
});
