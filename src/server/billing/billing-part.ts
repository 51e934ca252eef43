/** What of billing runs beside the requests: open payments and refunds are asked about, receipts, reminders and alerts go out, the ledger is verified. */
import { Cron } from 'croner';
import { sendBudgetAlerts } from '../budgets/send-budget-alerts.ts';
import { watchLedger } from '../ledger/watch-ledger.ts';
import { log } from '../log.ts';
import type { Part } from '../part.ts';
import { reconcileTopUps } from './reconcile-top-ups.ts';
import { remindProFormas } from './remind-pro-formas.ts';
import { sendOpenRefunds } from './send-refund.ts';
import { sendReceipts } from './send-receipts.ts';
import { onReceipts } from './wake-receipts.ts';

export const billingPart: Part = {
  name: 'billing',
  start: async () => {
    const running = new Set<Promise<unknown>>();
    let stopping = false;
    /** Runs in the background; trouble is logged and the next round tries again. */
    const run = (name: string, work: () => Promise<unknown>): Promise<unknown> => {
      if (stopping) return Promise.resolve();
      const done = work()
        .catch((error: unknown) => log().error({ err: error }, `${name} failed`))
        .finally(() => running.delete(done));
      running.add(done);
      return done;
    };
    const round = async (): Promise<void> => {
      await run('billing round', async () => {
        await reconcileTopUps();
        await sendOpenRefunds();
        await sendReceipts();
        await sendBudgetAlerts();
      });
    };
    const hourly = async (): Promise<void> => {
      await run('reminders of pro-formas', remindProFormas);
    };
    const nightly = async (): Promise<void> => {
      await run('ledger verification', () => watchLedger({ full: true }));
    };
    const jobs = [
      new Cron('*/20 * * * * *', { protect: true, unref: true }, round),
      new Cron('7 * * * *', { protect: true, unref: true }, hourly),
      new Cron('17 3 * * *', { protect: true, unref: true }, nightly),
    ];
    onReceipts(() => void run('receipts', sendReceipts));
    void run('ledger verification', () => watchLedger({ full: false }));
    void round();
    void hourly();
    return async () => {
      stopping = true;
      onReceipts(null);
      for (const job of jobs) job.stop();
      await Promise.all(running);
    };
  },
};
