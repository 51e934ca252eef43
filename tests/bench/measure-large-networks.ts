/** Composition-rejection against our own plain C program for it, one core each, in turns; and how the cost grows with the network. */
import { runBatch } from '@/engine/run-batch.ts';
import { batchTask } from '@tests/factories/batch-tasks.ts';
import { steadyChain } from '@tests/factories/large-networks.ts';
import { networkTable, runBaseline, type Measured } from './c-baselines.ts';
import { median, type BenchRow } from './rows.ts';

const horizon = 20;
const gridIntervals = 10;
/** Firings of one replicate of the open chain: 20 of each species, at 1 and 0.5 each. */
const eventsPerReplicate = (reactions: number): number => (reactions / 2) * 20 * 1.5 * horizon;

/** Processor time, since both cores may be busy with other work. */
async function runOurs(network: ReturnType<typeof steadyChain>, replicateCount: number): Promise<Measured> {
  const before = process.cpuUsage();
  const task = batchTask(network, { horizon, gridIntervals, replicateCount, kernel: 'composition-rejection' });
  const { eventsPerReplicate: events } = await runBatch(task);
  const { user, system } = process.cpuUsage(before);
  return { events: events.reduce((sum, count) => sum + count, 0), seconds: (user + system) / 1e6 };
}

/** The rows need gcc for the first; both need a chain of 100 and one of 10,000 reactions. */
export async function measureLargeNetworks(options: {
  rounds: number;
  eventsPerRound: number;
  compiler: boolean;
}): Promise<BenchRow[]> {
  const sizes = [100, 10_000].map((reactions) => {
    const network = steadyChain(reactions);
    const replicates = Math.max(4, 4 * Math.ceil(options.eventsPerRound / eventsPerReplicate(reactions) / 4));
    return { network, replicates, table: networkTable(network), ours: [] as number[], theirs: [] as number[] };
  });
  for (const { network, replicates } of sizes) await runOurs(network, replicates);
  for (let round = 0; round < options.rounds; round += 1)
    for (const { network, replicates, table, ours, theirs } of sizes) {
      const measured = await runOurs(network, replicates);
      ours.push(measured.events / measured.seconds);
      if (!options.compiler) continue;
      const baseline = runBaseline('composition-rejection', { replicates, seed: round, horizon, gridIntervals }, table);
      theirs.push(baseline.events / baseline.seconds);
    }
  const [small, large] = sizes as [(typeof sizes)[0], (typeof sizes)[0]];
  const value = median(large.ours);
  const growth: BenchRow = {
    measure: 'cost-growth-100-to-10000',
    network: 'open chain',
    value: 1e9 / value,
    unit: 'ns/event',
    baseline: 'the same with 100 reactions: at most',
    baselineValue: 1e9 / median(small.ours),
    ratio: median(small.ours) / value,
    atLeast: 1.4,
    aim: 1.1,
  };
  if (!options.compiler) return [growth];
  const baselineValue = median(large.theirs);
  return [
    {
      measure: 'large-network-vs-c',
      network: 'open chain of 10,000 reactions',
      value,
      unit: 'events/s',
      baseline: 'composition-rejection in C',
      baselineValue,
      ratio: value / baselineValue,
      atLeast: 0.85,
      aim: 1,
    },
    growth,
  ];
}
