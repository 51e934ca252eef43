/** What of jobs runs beside the requests: the executor's threads and the dispatcher. */
import { env } from '../env.ts';
import { log } from '../log.ts';
import type { Part } from '../part.ts';
import { setDispatcherWatch } from './batches-out.ts';
import { Dispatcher } from './dispatcher.ts';
import { setExecutor } from './executor.ts';
import { sweepFiles } from './sweep-files.ts';
import { startPiscinaExecutor } from './piscina-executor.ts';
import { workerFile } from './worker-file.ts';

export const jobsPart: Part = {
  name: 'jobs',
  async start() {
    const swept = await sweepFiles();
    if (swept > 0) log().info({ swept }, 'files left by a crash removed');
    const executor = startPiscinaExecutor({ workerFile: workerFile(), threads: env().BURETTE_WORKERS });
    setExecutor(executor);
    const dispatcher = new Dispatcher();
    setDispatcherWatch(dispatcher);
    await dispatcher.resume();
    return async () => {
      await dispatcher.stop();
      setDispatcherWatch(null);
      await executor.close();
      setExecutor(null);
    };
  },
};
