/** Events per second of the engine's own choice of kernel against hand-written and table-driven C, one core each, in turns. */
import { runBatch } from '@/engine/run-batch.ts';
import { batchTask } from '@tests/factories/batch-tasks.ts';
import { networkTable, runBaseline } from './c-baselines.ts';
import { smallNetworks, type BenchNetwork } from './networks.ts';
import { median, type BenchRow } from './rows.ts';

/** Processor time, since both cores may be busy with other work. */
async function runOurs(
  { network, horizon, gridIntervals }: BenchNetwork,
  replicateCount: number,
): Promise<{ events: number; seconds: number }> {
  const before = process.cpuUsage();
  const { eventsPerReplicate } = await runBatch(batchTask(network, { horizon, gridIntervals, replicateCount }));
  const { user, system } = process.cpuUsage(before);
  return { events: eventsPerReplicate.reduce((sum, events) => sum + events, 0), seconds: (user + system) / 1e6 };
}

export async function measureSmallNetworks(options: { rounds: number; eventsPerRound: number }): Promise<BenchRow[]> {
  const rows: BenchRow[] = [];
  for (const bench of smallNetworks) {
    const { name, horizon, gridIntervals } = bench;
    const trial = await runOurs(bench, 16);
    const replicates = 4 * Math.ceil(options.eventsPerRound / (trial.events / 16) / 4);
    await runOurs(bench, replicates);
    const speeds: Record<'ours' | 'hand' | 'generic', number[]> = { ours: [], hand: [], generic: [] };
    for (let round = 0; round < options.rounds; round += 1) {
      const size = { replicates, seed: round, horizon, gridIntervals };
      const ours = await runOurs(bench, replicates);
      const hand = runBaseline(name, size);
      const generic = runBaseline('generic', size, networkTable(bench.network));
      speeds.ours.push(ours.events / ours.seconds);
      speeds.hand.push(hand.events / hand.seconds);
      speeds.generic.push(generic.events / generic.seconds);
    }
    const value = median(speeds.ours);
    const row = (
      measure: BenchRow['measure'],
      baseline: string,
      baselineValue: number,
      atLeast: number,
      aim: number,
    ): BenchRow => ({
      measure,
      network: name,
      value,
      unit: 'events/s',
      baseline,
      baselineValue,
      ratio: value / baselineValue,
      atLeast,
      aim,
    });
    rows.push(row('events-vs-hand-c', 'hand-written C', median(speeds.hand), bench.handAtLeast, 3));
    rows.push(row('events-vs-generic-c', 'table-driven C', median(speeds.generic), 3, 4.5));
  }
  return rows;
}
