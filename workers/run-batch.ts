/** The simulation worker: a thin shell round the engine. It has no database and no clock but its own stopwatch. */
import { move, transferableSymbol, valueSymbol } from 'piscina';
import { engineVersion } from '@/engine/engine-version.ts';
import { runBatch } from '@/engine/run-batch.ts';
import { protocolVersion, type RunBatchAnswer, type RunBatchMessage } from './protocol.ts';

/** Hands the answer's arrays over instead of copying them. */
const handedOver = (answer: RunBatchAnswer): RunBatchAnswer =>
  move({
    get [transferableSymbol]() {
      const { blocks } = answer;
      const ofBlocks = blocks ? [...blocks.partLeaves, ...blocks.pieces].map(({ bytes }) => bytes) : [];
      const ofTraces = answer.traces.map(({ values }) => values);
      const arrays = [answer.eventsPerReplicate, answer.passageTimes, answer.summary, ...ofTraces, ...ofBlocks];
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
  const { summary, ...result } = await runBatch(message.task);
  const encoded = summary.encode();
  return handedOver({
    version: protocolVersion,
    engineVersion,
    ...result,
    summary: encoded,
    seconds: (performance.now() - start) / 1000,
  });
}
