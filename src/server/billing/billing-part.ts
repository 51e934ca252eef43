/** What of billing runs beside the requests: payments, cards and refunds are asked about, automatic top-ups begin, receipts and alerts go out, the ledger is verified. */
import { Cron } from 'croner';
import { sendBudgetAlerts } from '../budgets/send-budget-alerts.ts';
import { watchLedger } from '../ledger/watch-ledger.ts';
import { log } from '../log.ts';
import type { Part } from '../part.ts';
import { forgetCards } from './discard-card.ts';
import { reconcileCardSetups } from './reconcile-card-setups.ts';
import { findUnheardDisputes, reconcileDisputes } from './reconcile-disputes.ts';
import { reconcileTopUps } from './reconcile-top-ups.ts';
import { remindProFormas } from './remind-pro-formas.ts';
import { sendOpenRefunds } from './send-refund.ts';
import { sendReceipts } from './send-receipts.ts';
import { runAutomaticTopUps } from './run-automatic-top-ups.ts';
import { onLedgerChanged } from './wake-automatic-top-ups.ts';
import { onBillingWoken } from './wake-billing.ts';

/** Runs now, or once more after the present run: however many calls come meanwhile. */
function oneAtATime(work: () => Promise<unknown>): () => void {
  let state: 'idle' | 'running' | 'again' = 'idle';
  const begin = async (): Promise<void> => {
    do {
      state = 'running';
      await work();
    } while ((state as string) === 'again');
    state = 'idle';
  };
  return () => {
    if (state === 'idle') void begin();
    else state = 'again';
  };
}

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
        await reconcileCardSetups();
        await reconcileDisputes();
        await runAutomaticTopUps();
        await forgetCards();
        await sendOpenRefunds();
        await sendReceipts();
        await sendBudgetAlerts();
      });
    };
    const hourly = async (): Promise<void> => {
      await run('reminders of pro-formas', remindProFormas);
      await run('disputes that no event told of', findUnheardDisputes);
    };
    const nightly = async (): Promise<void> => {
      await run('ledger verification', () => watchLedger({ full: true }));
    };
    const jobs = [
      new Cron('*/20 * * * * *', { protect: true, unref: true }, round),
      new Cron('7 * * * *', { protect: true, unref: true }, hourly),
      new Cron('17 3 * * *', { protect: true, unref: true }, nightly),
    ];
    onBillingWoken(
      () =>
        void run('billing after a commit', async () => {
          await sendReceipts();
          await forgetCards();
        }),
    );
    onLedgerChanged(oneAtATime(() => run('automatic top-ups', runAutomaticTopUps)));
    void run('ledger verification', () => watchLedger({ full: false }));
    void round();
    void hourly();
    return async () => {
      stopping = true;
      onBillingWoken(null);
      onLedgerChanged(null);
      for (const job of jobs) job.stop();
      await Promise.all(running);
    };
  },
};
