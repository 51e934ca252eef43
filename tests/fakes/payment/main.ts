/**
 * The payment fake as a process of its own. Environment: PORT (or the first argument), WEBHOOK_URL, WEBHOOK_SECRET,
 * STATE_FILE (optional). Ends when its parent's IPC channel closes, so that a killed parent leaves no port taken.
 */
import { startPaymentFake } from './server.ts';

const { PORT, WEBHOOK_URL, WEBHOOK_SECRET, STATE_FILE } = process.env;
if (!WEBHOOK_URL || !WEBHOOK_SECRET) {
  console.error('The payment fake needs WEBHOOK_URL and WEBHOOK_SECRET.');
  process.exit(2);
}
const fake = await startPaymentFake({
  port: Number(process.argv[2] ?? PORT ?? 0),
  webhookUrl: WEBHOOK_URL,
  webhookSecret: WEBHOOK_SECRET,
  stateFile: STATE_FILE,
});
process.send?.({ ready: true, url: fake.url });
const stop = () => void fake.close().then(() => process.exit(0));
process.once('disconnect', stop);
process.once('SIGTERM', stop);
process.once('SIGINT', stop);
