// Drives one job through the HTTP API as a script would: model, quote, launch, wait, statistics, archive; prints what happened.
import { createHash } from 'node:crypto';
import { mkdir, writeFile } from 'node:fs/promises';
import path from 'node:path';
import { root, run, Stop } from './processes.mjs';

const team = 'tarn-fell';
const email = 'modeller@tarnfell.example';
const jobName = 'Demo: ward outbreak, first 60 days';
const modelName = 'Ward outbreak';

async function makeToken(dataDir) {
  const { code, output } = await run(
    process.execPath,
    ['--import', 'tsx', 'src/commands/token.ts', '--email', email, '--team', team],
    { cwd: root, capture: true, env: { BURETTE_DATA_DIR: dataDir, LOG_LEVEL: 'silent' } },
  );
  if (code !== 0) throw new Stop(`No token for ${email}: ${output.trim()}`);
  return output.trim().split('\n').at(-1);
}

/** A tiny client: throws with the problem's own words. */
function client(localUrl, token) {
  return async (method, route, body) => {
    const response = await fetch(`${localUrl}/api/v1/teams/${team}/${route}`, {
      method,
      headers: { Authorization: `Bearer ${token}`, ...(body ? { 'Content-Type': 'application/json' } : {}) },
      body: body ? JSON.stringify(body) : undefined,
    });
    if (!response.ok) throw new Stop(`${method} ${route}: ${await response.text()}`);
    return response;
  };
}

const credits = (microcredits) => `${(microcredits / 1_000_000).toFixed(3)} credits`;

async function launch(call) {
  const { models } = await (await call('GET', 'models?limit=200')).json();
  const model = models.find(({ name }) => name === modelName);
  if (!model) return null;
  const request = {
    modelVersionId: model.latestVersion.id,
    replicates: 4000,
    horizon: 60,
    gridIntervals: 60,
    method: 'exact',
    seed: 20261201,
    lane: 'steady',
  };
  const { quote } = await (await call('POST', 'quotes', request)).json();
  console.log(
    `  quote    ${credits(quote.microcredits.expected)} (95 %: ${credits(quote.microcredits.low)} to ${credits(quote.microcredits.high)}), ` +
      `${quote.eventsPerReplicate.mean.toFixed(1)} ± ${quote.eventsPerReplicate.sd.toFixed(1)} events per replicate`,
  );
  const { job } = await (await call('POST', 'jobs', { quoteId: quote.id, name: jobName })).json();
  return job.id;
}

async function waitForEnd(call, id) {
  for (;;) {
    const { job } = await (await call('GET', `jobs/${id}`)).json();
    if (!['queued', 'running'].includes(job.state)) return job;
    await new Promise((resolve) => setTimeout(resolve, 250));
  }
}

/** Runs the demo job, or reports it again when this database has run it. */
export async function runDemoJob({ localUrl, dataDir }) {
  const call = client(localUrl, await makeToken(dataDir));
  const { jobs } = await (await call('GET', 'jobs?limit=200')).json();
  const earlier = jobs.find(({ name }) => name === jobName);
  console.log(`\n${earlier ? 'The demo job of this database' : 'Running the demo job through the API'}: “${jobName}”`);
  const id = earlier?.id ?? (await launch(call));
  if (!id) return console.log('  no demo model in this database; nothing was run');
  const job = await waitForEnd(call, id);
  const archive = Buffer.from(await (await call('GET', `jobs/${id}/archive`)).arrayBuffer());
  const sha256 = createHash('sha256').update(archive).digest('hex');
  const file = path.join(dataDir, 'demo', `${id}.zip`);
  await mkdir(path.dirname(file), { recursive: true });
  await writeFile(file, archive);
  console.log(
    `  job      ${job.id}, ${job.state}, ${job.replicatesDone.toLocaleString('en')} replicates, seed ${job.seed}, kernel ${job.kernel}`,
  );
  console.log(`  events   ${job.events.toLocaleString('en')}`);
  console.log(`  charge   ${credits(job.chargedMicrocredits)}`);
  console.log(`  archive  ${path.relative(process.cwd(), file)} (${archive.length.toLocaleString('en')} bytes)`);
  console.log(`  SHA-256  ${sha256}`);
}
