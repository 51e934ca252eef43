/** The simulation worker: a thin shell round the engine. It has no database and no clock but its own stopwatch. */
import { move, transferableSymbol, valueSymbol } from 'piscina';
import { engineVersion } from '@/engine/engine-version.ts';
import { runPoints } from '@/engine/run-points.ts';
import { protocolVersion, type RunBatchAnswer, type RunBatchMessage } from './protocol.ts';

/** Hands the answer's arrays over instead of copying them. */
const handedOver = (answer: RunBatchAnswer): RunBatchAnswer =>
  move({
    get [transferableSymbol]() {
      const arrays = answer.points.flatMap(({ eventsPerReplicate, passageTimes, summary, traces, blocks }) => {
        const ofBlocks = blocks ? [...blocks.partLeaves, ...blocks.pieces].map(({ bytes }) => bytes) : [];
        return [eventsPerReplicate, passageTimes, summary, ...traces.map(({ values }) => values), ...ofBlocks];
      });
      return arrays.map((array) => array.buffer) as unknown as object;
    },
    get [valueSymbol]() {
      return answer;
    },
  }) as unknown as RunBatchAnswer;

/** Throws when the message is of another protocol version or the task is impossible; a failure of the model is an answer. */
export default async function run(message: RunBatchMessage): Promise<RunBatchAnswer> {
  if (message.version !== protocolVersion)
    throw new Error(`this worker speaks protocol ${protocolVersion}, not ${message.version}`);
  const start = performance.now();
  const { points, ...result } = await runPoints(message.task);
  return handedOver({
    version: protocolVersion,
    engineVersion,
    ...result,
    points: points.map(({ eventsPerReplicate, passageTimes, summary, traces, blocks }) => ({
      eventsPerReplicate,
      passageTimes,
      summary: summary.encode(),
      traces,
      blocks,
    })),
    seconds: (performance.now() - start) / 1000,
  });
}
