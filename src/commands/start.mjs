// `npm start`: install, build, start the local fakes, migrate, seed an empty database, serve, run the demo job, keep serving.
import { spawn } from 'node:child_process';
import { createWriteStream, existsSync } from 'node:fs';
import { mkdir, readFile } from 'node:fs/promises';
import path from 'node:path';
import { createInterface } from 'node:readline';
import { build } from './build.mjs';
import { runDemoJob } from './demo-job.mjs';
import { startFakes } from './fakes.mjs';
import { install } from './install.mjs';
import { main, root, run, Stop } from './processes.mjs';

const port = Number(process.env.PORT ?? 4321);
const publicUrl = (process.env.PUBLIC_URL ?? `http://localhost:${port}`).replace(/\/+$/, '');
const localUrl = `http://127.0.0.1:${port}`;
const dataDir = path.resolve(root, process.env.BURETTE_DATA_DIR ?? 'var');

/** Starts the server; its log goes to a file, warnings and worse also to the terminal. */
function startServer(outDir, env) {
  const server = spawn(process.execPath, [path.join(outDir, 'server/entry.mjs')], {
    cwd: root,
    env: { ...process.env, ...env },
    stdio: ['ignore', 'pipe', 'inherit'],
  });
  const file = createWriteStream(path.join(dataDir, 'server.log'), { flags: 'a' });
  createInterface({ input: server.stdout }).on('line', (line) => {
    file.write(`${line}\n`);
    if (!/"level":(10|20|30),/.test(line)) console.error(line);
  });
  return server;
}

async function waitForHealth(server) {
  for (let attempt = 0; attempt < 600; attempt += 1) {
    if (server.exitCode !== null) throw new Stop('The server stopped while starting; it says why above.');
    try {
      if ((await fetch(`${localUrl}/api/v1/health`)).ok) return;
    } catch {
      // Not listening yet.
    }
    await new Promise((resolve) => setTimeout(resolve, 100));
  }
  throw new Stop('The server did not answer within a minute. See server.log in the data folder.');
}

async function printPeople() {
  const file = path.join(dataDir, 'demo-people.json');
  if (!existsSync(file)) return;
  const people = JSON.parse(await readFile(file, 'utf8'));
  console.log(`\nSign in at ${publicUrl}/sign-in as`);
  for (const { email, password, role } of people) console.log(`  ${email.padEnd(28)} ${password.padEnd(22)} ${role}`);
}

await main(async () => {
  await install();
  const outDir = await build();
  await mkdir(dataDir, { recursive: true });
  const { env: fakeEnv, children } = await startFakes({ port, publicUrl, dataDir });
  const env = {
    ...fakeEnv,
    NODE_ENV: 'production',
    PORT: String(port),
    PUBLIC_URL: publicUrl,
    BURETTE_DATA_DIR: dataDir,
  };

  const seeded = await run(process.execPath, ['--import', 'tsx', 'src/commands/seed.ts'], {
    cwd: root,
    env: { LOG_LEVEL: 'warn', ...env },
  });
  if (seeded.code !== 0) throw new Stop('The demo data could not be put into the new database; the reason is above.');

  const server = startServer(outDir, env);
  let stopping = false;
  const stop = () => {
    if (stopping) return;
    stopping = true;
    console.log('\nStopping…');
    server.kill('SIGTERM');
  };
  process.on('SIGINT', stop);
  process.on('SIGTERM', stop);
  server.once('exit', (code) => {
    for (const child of children) child.disconnect();
    process.exit(stopping ? 0 : (code ?? 1) || 1);
  });

  await waitForHealth(server);
  console.log(`\nBurette serves on ${publicUrl}`);
  if (env.MAILBOX_URL)
    console.log(`Local mailbox: ${env.MAILBOX_URL}   Local payment fake: ${env.STRIPE_FAKE_URL ?? 'not used'}`);
  try {
    await runDemoJob({ localUrl, dataDir });
  } catch (error) {
    if (!stopping) console.error(`The demo job did not finish: ${error instanceof Error ? error.message : error}`);
    if (!stopping) process.exitCode = 1;
  }
  await printPeople();
  console.log('\nCtrl-C stops everything.');
});
