/**
 * `npm run bench -- [--json FILE] [--quick]`: speed as ratios within one run, against hand-written C for the same
 * networks (tests/bench), compiled here with gcc. Ours and theirs take turns, in processor time; medians are shown.
 */
import { writeFile } from 'node:fs/promises';
import os from 'node:os';
import { parseArgs } from 'node:util';
import { compilerFlags, compilerVersion } from '@tests/bench/c-baselines.ts';
import { measureColdStart } from '@tests/bench/measure-cold-start.ts';
import { measureLargeNetworks } from '@tests/bench/measure-large-networks.ts';
import { measureSmallNetworks } from '@tests/bench/measure-small-networks.ts';
import { measureTwoWorkers } from '@tests/bench/measure-two-workers.ts';
import type { BenchRow } from '@tests/bench/rows.ts';
import { engineVersion } from '@/engine/engine-version.ts';

const { values } = parseArgs({ options: { json: { type: 'string' }, quick: { type: 'boolean', default: false } } });
const rounds = values.quick ? 3 : 9;

const compiler = compilerVersion();
if (!compiler) console.error('gcc was not found: the rows against C are left out.');

const rows: BenchRow[] = [
  ...(compiler ? await measureSmallNetworks({ rounds, eventsPerRound: values.quick ? 5e6 : 4e7 }) : []),
  ...(await measureLargeNetworks({
    rounds,
    eventsPerRound: values.quick ? 1e7 : 4e7,
    compiler: compiler !== null,
  })),
  await measureColdStart({ rounds }),
  await measureTwoWorkers({ rounds: values.quick ? 1 : 3, eventsPerRound: values.quick ? 2e7 : 2e8 }),
];

const machine = {
  cpu: os.cpus()[0]?.model ?? 'unknown',
  cores: os.cpus().length,
  // Ratios are taken within one run, but a busy machine makes every figure noisier.
  loadAverage: os.loadavg()[0]!,
  node: process.version,
  v8: process.versions.v8,
  compiler,
  compilerFlags,
  engineVersion,
};

const figure = (value: number | null) =>
  value === null ? '–' : value >= 1e5 ? `${(value / 1e6).toFixed(1)} M` : value.toFixed(2);
console.log(
  `${machine.cpu}, ${machine.cores} cores, load ${machine.loadAverage.toFixed(1)}, Node ${machine.node}, ${compiler ?? 'no gcc'}`,
);
console.table(
  rows.map((row) => ({
    measure: row.measure,
    network: row.network,
    value: `${figure(row.value)} ${row.unit}`,
    baseline: row.baseline,
    'baseline value': figure(row.baselineValue),
    ratio: row.ratio?.toFixed(2) ?? '–',
    'at least': row.atLeast,
    aim: row.aim,
  })),
);
if (values.json) await writeFile(values.json, `${JSON.stringify({ machine, rows }, null, 2)}\n`);
