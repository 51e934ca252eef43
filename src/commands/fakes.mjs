// Starts the local fakes (payments, mail) as processes of their own. They exit by themselves when we do: their IPC
// channel closes, even after kill -9.
import { spawn } from 'node:child_process';
import net from 'node:net';
import path from 'node:path';
import { root, Stop } from './processes.mjs';

const isFree = (port) =>
  new Promise((resolve) => {
    const probe = net.createServer();
    probe.once('error', () => resolve(false));
    probe.listen(port, '127.0.0.1', () => probe.close(() => resolve(true)));
  });

/** The first free port from `start` on. */
export async function freePort(start) {
  for (let port = start; port < start + 200; port += 1) if (await isFree(port)) return port;
  throw new Stop(`No free port was found from ${start} to ${start + 199}.`);
}

/** Starts one fake and waits for its `{ ready: true }`. */
function startFake(name, env) {
  return new Promise((resolve, reject) => {
    const child = spawn(process.execPath, ['--import', 'tsx', path.join(root, `tests/fakes/${name}/main.ts`)], {
      cwd: root,
      env: { ...process.env, ...env },
      stdio: ['ignore', 'ignore', 'inherit', 'ipc'],
    });
    child.once('message', () => resolve(child));
    child.once('error', reject);
    child.once('exit', (code) => reject(new Stop(`The local ${name} fake stopped at once (exit code ${code}).`)));
  });
}

/**
 * Starts what the environment does not replace by a real service, and returns the variables that the server needs.
 * @param {{ port: number, publicUrl: string, dataDir: string }} options
 */
export async function startFakes({ port, publicUrl, dataDir }) {
  const children = [];
  /** @type {Record<string, string>} */
  const env = {};
  if (!process.env.STRIPE_SECRET_KEY) {
    const paymentPort = await freePort(port + 1);
    env.STRIPE_FAKE_URL = `http://localhost:${paymentPort}`;
    env.STRIPE_WEBHOOK_SECRET = process.env.STRIPE_WEBHOOK_SECRET ?? 'whsec_local_fake_only';
    children.push(
      await startFake('payment', {
        PORT: String(paymentPort),
        STATE_FILE: path.join(dataDir, 'payment-fake.json'),
        WEBHOOK_URL: `${publicUrl}/api/v1/webhooks/stripe`,
        WEBHOOK_SECRET: env.STRIPE_WEBHOOK_SECRET,
      }),
    );
  }
  if (!process.env.SMTP_URL) {
    const smtpPort = await freePort(port + 2);
    const mailboxPort = await freePort(Math.max(port + 3, smtpPort + 1));
    env.SMTP_FAKE_URL = `smtp://localhost:${smtpPort}`;
    env.MAILBOX_URL = `http://localhost:${mailboxPort}`;
    children.push(
      await startFake('smtp', {
        SMTP_FAKE_PORT: String(smtpPort),
        SMTP_FAKE_MAILBOX_PORT: String(mailboxPort),
        SMTP_FAKE_FOLDER: path.join(dataDir, 'mailbox'),
      }),
    );
  }
  return { env, children };
}
