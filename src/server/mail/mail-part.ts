/** Empties the outbox beside the requests: at start, whenever something is queued, and when a retry falls due. */
import { AsyncResource } from 'node:async_hooks';
import { log } from '../log.ts';
import type { Part } from '../part.ts';
import { mailTransport } from './mail-transport.ts';
import { sendOutbox } from './send-outbox.ts';
import { onMailQueued } from './wake-mail-part.ts';

/** After trouble with our own database; mails' retries have their own times. */
const troubleDelayMs = 30_000;
/** Node's timers take no more than 2^31 − 1 ms. */
const longestSleepMs = 60 * 60 * 1000;

export const mailPart: Part = {
  name: 'mail',
  start: async () => {
    const transport = mailTransport();
    if (!transport) {
      log().warn('neither SMTP_URL nor SMTP_FAKE_URL is set: mails wait in the outbox');
      return async () => undefined;
    }
    let stopping = false;
    let wanted = false;
    let running: Promise<void> | null = null;
    let timer: NodeJS.Timeout | undefined;

    const round = async (): Promise<void> => {
      let delayMs: number | null = null;
      do {
        wanted = false;
        delayMs = await sendOutbox({ transport, stopping: () => stopping }).catch((error: unknown) => {
          log().error({ err: error }, 'outbox failed');
          return troubleDelayMs;
        });
      } while (wanted && !stopping);
      running = null;
      if (delayMs !== null && !stopping) timer = setTimeout(wake, Math.min(delayMs, longestSleepMs));
    };
    const wake = (): void => {
      wanted = true;
      if (running || stopping) return;
      clearTimeout(timer);
      running = round();
    };

    // In this part's own context: a request that queues a mail lends it neither its log nor its transaction.
    onMailQueued(AsyncResource.bind(wake));
    wake();
    return async () => {
      stopping = true;
      onMailQueued(null);
      clearTimeout(timer);
      await running;
      transport.close();
    };
  },
};
