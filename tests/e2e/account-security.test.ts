/** A second factor from setting up to signing in with it, and a webhook from adding it to its log, in a browser. */
import { createServer, type Server } from 'node:http';
import { readFile } from 'node:fs/promises';
import type { AddressInfo } from 'node:net';
import path from 'node:path';
import type { Browser, Page } from 'playwright-core';
import { afterAll, beforeAll, expect, it } from 'vitest';
import { authenticatorCode } from '@tests/support/authenticator.ts';
import { axeFaults, openBrowser, openPage, scrollsSideways } from './browser.ts';
import { startApp, type RunningApp } from './running-app.ts';

let app: RunningApp;
let browser: Browser;
let receiver: Server;
const passwords = new Map<string, string>();
const team = '/t/tarn-fell';

beforeAll(async () => {
  receiver = createServer((_, answer) => answer.writeHead(204).end());
  await new Promise<void>((resolve) => receiver.listen(0, '127.0.0.1', resolve));
  [app, browser] = await Promise.all([startApp({ seed: true }), openBrowser()]);
  const people = JSON.parse(await readFile(path.join(app.dataDir, 'demo-people.json'), 'utf8')) as {
    email: string;
    password: string;
  }[];
  for (const { email, password } of people) passwords.set(email, password);
}, 240_000);
afterAll(async () => {
  receiver?.close();
  await browser?.close();
  await app?.stop();
});

async function typeCredentials(page: Page, email: string): Promise<void> {
  await page.getByLabel('E-mail').fill(email);
  await page.getByLabel('Password').fill(passwords.get(email)!);
}
async function look(page: Page): Promise<void> {
  expect(await axeFaults(page)).toEqual([]);
  expect(await scrollsSideways(page)).toBe(false);
}

it('sets up a second factor, keeps its recovery codes and signs in with code and recovery code', async () => {
  const email = 'viewer@tarnfell.example';
  const { page, faults } = await openPage(browser, { viewport: { width: 390, height: 900 }, colorScheme: 'dark' });
  await page.goto(`${app.url}/sign-in`);
  await typeCredentials(page, email);
  await page.getByRole('button', { name: 'Sign in' }).click();
  await page.waitForURL(`**${team}/overview`);

  await page.goto(`${app.url}/account`);
  await page.locator('#factor-password').fill(passwords.get(email)!);
  await page.getByRole('button', { name: 'Set up a second factor' }).click();
  const secret = (await page.locator('section[aria-labelledby="factor-title"] code').innerText()).replaceAll(/\s/g, '');
  await look(page);
  await page.getByLabel('Code').fill(authenticatorCode(secret, Date.now()));
  await page.getByRole('button', { name: 'Turn the second factor on' }).click();
  const codes = await page.locator('section[aria-labelledby="factor-title"] li').allInnerTexts();
  expect(codes).toHaveLength(10);
  await look(page);

  await page.context().clearCookies();
  await page.goto(`${app.url}/sign-in`);
  await typeCredentials(page, email);
  await page.getByRole('button', { name: 'Sign in' }).click();
  await page.getByLabel('Code').waitFor();
  await look(page);
  await typeCredentials(page, email);
  // One step ahead: the code of now was used up by turning the factor on.
  await page.getByLabel('Code').fill(authenticatorCode(secret, Date.now(), 1));
  await page.getByRole('button', { name: 'Sign in' }).click();
  await page.waitForURL(`**${team}/overview`);

  await page.goto(`${app.url}/account`);
  await page.locator('#factor-password').fill(passwords.get(email)!);
  await page.getByLabel('Code').fill(codes[0]!);
  await page.getByRole('button', { name: 'Turn the second factor off' }).click();
  await page.getByText('The second factor is off.').waitFor();
  expect(faults).toEqual([]);
  await page.context().close();
});

it('adds a webhook, shows its secret once and what became of it', async () => {
  const { page, faults } = await openPage(browser);
  await page.goto(`${app.url}/sign-in`);
  await typeCredentials(page, 'owner@tarnfell.example');
  await page.getByRole('button', { name: 'Sign in' }).click();
  await page.waitForURL(`**${team}/overview`);
  await page.goto(`${app.url}${team}/team/webhooks`, { waitUntil: 'networkidle' });
  await look(page);
  const { port } = receiver.address() as AddressInfo;
  await page.getByLabel('Address').fill(`http://127.0.0.1:${port}/hook`);
  await page.getByRole('button', { name: 'Add the webhook' }).click();
  await page.getByText('Copy the secret now').waitFor();
  await page.getByText('Delivery log').click();
  await page.getByText('Nothing has been sent yet.').waitFor();
  await look(page);
  await page.reload({ waitUntil: 'networkidle' });
  expect(await page.getByText('whsec_').count()).toBe(0);
  expect(faults).toEqual([]);
  await page.context().close();
});
