/**
 * On the seeded demo: the API's main path by a bash script with a token made on the command line, and the modeller's
 * pages in both themes and at both widths without an axe fault, console error or sideways scroll.
 */
import { execFile } from 'node:child_process';
import { readFile } from 'node:fs/promises';
import path from 'node:path';
import { promisify } from 'node:util';
import type { Browser } from 'playwright-core';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { projectRoot } from '@/server/project-root.ts';
import { axeFaults, openBrowser, openPage, scrollsSideways } from './browser.ts';
import { startApp, type RunningApp } from './running-app.ts';

const run = promisify(execFile);
const email = 'modeller@tarnfell.example';
let app: RunningApp;
let browser: Browser;
let token = '';

beforeAll(async () => {
  app = await startApp({ seed: true });
  browser = await openBrowser();
  const command = ['--import', 'tsx', 'src/commands/token.ts', '--email', email, '--team', 'tarn-fell'];
  const { stdout } = await run(process.execPath, command, { cwd: projectRoot, env: { ...process.env, ...app.env } });
  token = stdout.trim();
}, 240_000);
afterAll(async () => {
  await browser?.close();
  await app?.stop();
});

async function list(what: 'models' | 'jobs'): Promise<{ id: string; name: string }[]> {
  const answer = await fetch(`${app.url}/api/v1/teams/tarn-fell/${what}`, {
    headers: { Authorization: `Bearer ${token}` },
  });
  return ((await answer.json()) as Record<typeof what, { id: string; name: string }[]>)[what];
}

describe('a script with curl', () => {
  it('goes from a model to a checked archive, and finds the mean that theory gives', async () => {
    const script = path.join(projectRoot, 'tests/api/main-path.sh');
    const { stdout } = await run('bash', [script, app.url, 'tarn-fell', token, app.dataDir]);
    expect(stdout).toMatch(/^job {6}job_\w+ done, \d+ microcredits charged$/m);
    expect(stdout).toMatch(/^SHA-256 {2}[0-9a-f]{64}$/m);
    // Immigration-death, a = 10, m = 0.1, t = 10: mean (a/m)(1 − e^{−mt}) = 63.2120558829, variance the same (Bailey
    // 1964 ch. 8; citation from memory, value recomputed). Fixed seed; 4 standard errors: false alarm 6·10⁻⁵.
    const mean = Number(/^mean {5}(\S+)/m.exec(stdout)?.[1]);
    expect(Math.abs(mean - 63.2120558829)).toBeLessThan(4 * Math.sqrt(63.2120558829 / 2000));
  });

  it('is told in words when the token is wrong', async () => {
    const script = path.join(projectRoot, 'tests/api/main-path.sh');
    const failed = await run('bash', [script, app.url, 'tarn-fell', 'burette_wrong', app.dataDir]).catch(
      (error: unknown) => error,
    );
    expect(failed).toMatchObject({ code: 22 });
  });
});

describe.each([
  // Colours depend on the theme and layout on the width: two walks see both of each.
  { colorScheme: 'light', width: 1440 },
  { colorScheme: 'dark', width: 390 },
] as const)('the modeller’s pages, $colorScheme at $width px', ({ colorScheme, width }) => {
  it('have no axe fault, no console error and no sideways scroll', async () => {
    const { page, faults } = await openPage(browser, { colorScheme, viewport: { width, height: 900 } });
    const people = JSON.parse(await readFile(path.join(app.dataDir, 'demo-people.json'), 'utf8')) as {
      email: string;
      password: string;
    }[];
    await page.goto(`${app.url}/sign-in`);
    await page.getByLabel('E-mail').fill(email);
    await page.getByLabel('Password').fill(people.find((person) => person.email === email)!.password);
    await page.getByRole('button', { name: 'Sign in' }).click();
    await page.waitForURL('**/overview');
    const [models, jobs] = [await list('models'), await list('jobs')];
    const job = jobs.find(({ name }) => name.startsWith('Switch'))!.id;
    const addresses = [
      '/models',
      '/models/new',
      ...models.slice(0, 2).map(({ id }) => `/models/${id}`),
      '/jobs',
      '/jobs/new',
      `/jobs/${job}`,
      `/jobs/${jobs.find(({ name }) => name.endsWith('capped'))!.id}`,
      '/jobs/job_none',
    ];
    for (const address of addresses) {
      await page.goto(`${app.url}/t/tarn-fell${address}`, { waitUntil: 'networkidle' });
      expect(await axeFaults(page)).toEqual([]);
      expect(await scrollsSideways(page), `${address} scrolls sideways`).toBe(false);
    }
    await page.goto(`${app.url}/t/tarn-fell/jobs/${job}`);
    for (const tab of ['Distribution', 'Traces', 'Numbers', 'Time course']) {
      await page.getByRole('tab', { name: tab }).click();
      await page.getByRole('tabpanel').locator('figure, table').first().waitFor();
      expect(await axeFaults(page), tab).toEqual([]);
      expect(await scrollsSideways(page), `${tab} scrolls sideways`).toBe(false);
    }
    expect(faults).toEqual([]);
    await page.context().close();
  });
});
