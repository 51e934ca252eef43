/** What of jobs runs beside the requests: the executor's threads and the dispatcher. */
import { env } from '../env.ts';
import { log } from '../log.ts';
import type { Part } from '../part.ts';
import { setDispatcherWatch } from './batches-out.ts';
import { Dispatcher } from './dispatcher.ts';
import { setExecutor } from './executor.ts';
import { sweepFiles } from './sweep-files.ts';
import { startPiscinaExecutor } from './piscina-executor.ts';
import { setResultsWriter, startResultsWriter } from './results-writer.ts';
import { workerFile } from './worker-file.ts';

export const jobsPart: Part = {
  name: 'jobs',
  async start() {
    const swept = await sweepFiles();
    if (swept > 0) log().info({ swept }, 'files left by a crash removed');
    const executor = startPiscinaExecutor({ workerFile: workerFile('run-batch'), threads: env().BURETTE_WORKERS });
    setExecutor(executor);
    const writer = startResultsWriter({ workerFile: workerFile('write-results') });
    setResultsWriter(writer);
    const dispatcher = new Dispatcher();
    setDispatcherWatch(dispatcher);
    await dispatcher.resume();
    return async () => {
      const stopped = dispatcher.stop();
      // What it was writing is written again at the next start.
      await writer.close();
      await stopped;
      setDispatcherWatch(null);
      await executor.close();
      setExecutor(null);
      setResultsWriter(null);
    };
  },
};
