/** The built server as a process that can be killed without warning and started again on the same data. */
import { spawn, type ChildProcess } from 'node:child_process';
import { existsSync } from 'node:fs';
import { rm } from 'node:fs/promises';
import path from 'node:path';
import { projectRoot } from '@/server/project-root.ts';
import { freePort } from '../../src/commands/fakes.mjs';

export class KillableServer {
  readonly url: string;
  readonly #env: NodeJS.ProcessEnv;
  readonly #dataDir: string;
  #process: ChildProcess | null = null;
  #log = '';

  private constructor(dataDir: string, port: number) {
    this.url = `http://127.0.0.1:${port}`;
    this.#dataDir = dataDir;
    this.#env = {
      ...process.env,
      NODE_ENV: 'production',
      PORT: String(port),
      PUBLIC_URL: this.url,
      BURETTE_DATA_DIR: dataDir,
      BURETTE_WORKERS: '2',
      LOG_LEVEL: 'warn',
    };
  }

  static async create(dataDir: string): Promise<KillableServer> {
    return new KillableServer(dataDir, await freePort(4700));
  }

  async start(): Promise<void> {
    const entry = path.join(path.resolve(projectRoot, process.env['BURETTE_OUT_DIR'] ?? 'dist'), 'server/entry.mjs');
    if (!existsSync(entry)) throw new Error('The server is not built: run `npm run build` first.');
    const server = spawn(process.execPath, [entry], {
      cwd: projectRoot,
      env: this.#env,
      stdio: ['ignore', 'pipe', 'pipe'],
    });
    this.#process = server;
    for (const stream of [server.stdout, server.stderr])
      stream.on('data', (chunk: Buffer) => (this.#log = (this.#log + chunk.toString()).slice(-20_000)));
    while (!(await this.#answers())) {
      if (server.exitCode !== null) throw new Error(`The server stopped while starting:\n${this.#log}`);
      await new Promise((resolve) => setTimeout(resolve, 25));
    }
  }

  async #answers(): Promise<boolean> {
    const answer = await fetch(`${this.url}/api/v1/health`).catch(() => null);
    return answer?.ok ?? false;
  }

  /** kill -9, as a power cut would. */
  async kill(): Promise<void> {
    await this.#end('SIGKILL');
    // A dead process's lock is taken over once its heartbeat is five seconds old; the test does not wait for that.
    await rm(path.join(this.#dataDir, 'lock'), { recursive: true, force: true });
  }

  stop(): Promise<void> {
    return this.#end('SIGTERM');
  }

  async #end(signal: NodeJS.Signals): Promise<void> {
    const server = this.#process;
    if (!server || server.exitCode !== null || server.signalCode !== null) return;
    const exited = new Promise((resolve) => server.once('exit', resolve));
    server.kill(signal);
    await exited;
  }

  get log(): string {
    return this.#log;
  }
}
