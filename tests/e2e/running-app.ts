/** Starts the built server with its local fakes in an empty data folder, as `npm start` does, for one test file. */
import { spawn, type ChildProcess } from 'node:child_process';
import { mkdtemp, rm } from 'node:fs/promises';
import { tmpdir } from 'node:os';
import path from 'node:path';
import { projectRoot } from '@/server/project-root.ts';
import { freePort, startFakes } from '../../src/commands/fakes.mjs';

export interface RunningApp {
  url: string;
  mailboxUrl: string;
  paymentUrl: string;
  dataDir: string;
  /** The environment the server was started with, for commands that work beside it. */
  env: Record<string, string>;
  stop(): Promise<void>;
}

async function waitForHealth(url: string, server: ChildProcess, log: () => string): Promise<void> {
  const deadline = Date.now() + 60_000;
  while (Date.now() < deadline) {
    if (server.exitCode !== null) throw new Error(`The server stopped while starting:\n${log()}`);
    const answer = await fetch(`${url}/api/v1/health`).catch(() => null);
    if (answer?.ok) return;
    await new Promise((resolve) => setTimeout(resolve, 100));
  }
  throw new Error(`The server did not answer within a minute:\n${log()}`);
}

/** `seed` puts the demo teams in first. */
export async function startApp(options: { seed?: boolean } = {}): Promise<RunningApp> {
  const dataDir = await mkdtemp(path.join(tmpdir(), 'burette-e2e-'));
  const port = await freePort(4600);
  const url = `http://localhost:${port}`;
  const { env: fakes, children } = await startFakes({ port, publicUrl: url, dataDir });
  const env: Record<string, string> = {
    ...fakes,
    NODE_ENV: 'production',
    PORT: String(port),
    PUBLIC_URL: url,
    BURETTE_DATA_DIR: dataDir,
    LOG_LEVEL: 'warn',
  };
  if (options.seed) await runSeed(env);
  const outDir = path.resolve(projectRoot, process.env['BURETTE_OUT_DIR'] ?? 'dist');
  const server = spawn(process.execPath, [path.join(outDir, 'server/entry.mjs')], {
    cwd: projectRoot,
    env: { ...process.env, ...env },
    stdio: ['ignore', 'pipe', 'pipe'],
  });
  let log = '';
  for (const stream of [server.stdout, server.stderr]) stream.on('data', (chunk: Buffer) => (log += chunk.toString()));
  await waitForHealth(url, server, () => log);
  return {
    url,
    mailboxUrl: env['MAILBOX_URL']!,
    paymentUrl: env['STRIPE_FAKE_URL']!,
    dataDir,
    env,
    stop: async () => {
      const exited = new Promise((resolve) => server.once('exit', resolve));
      server.kill('SIGTERM');
      await exited;
      for (const child of children as ChildProcess[]) child.disconnect();
      await rm(dataDir, { recursive: true, force: true });
    },
  };
}

async function runSeed(env: Record<string, string>): Promise<void> {
  const seed = spawn(process.execPath, ['--import', 'tsx', 'src/commands/seed.ts'], {
    cwd: projectRoot,
    env: { ...process.env, ...env },
    stdio: ['ignore', 'inherit', 'inherit'],
  });
  const code = await new Promise<number | null>((resolve) => seed.once('exit', resolve));
  if (code !== 0) throw new Error('Seeding failed; the reason is above.');
}
