/**
 * The main job in a real browser, on an empty installation: sign up, verify from the mailbox, top up with a card that is
 * first declined and then accepted, build a model by keyboard, quote, launch, watch, read, download and check the
 * archive; finance is invited, signs in and downloads the invoice. axe looks at every page on the way.
 */
import { createHash } from 'node:crypto';
import { readFile } from 'node:fs/promises';
import { unzipSync } from 'fflate';
import type { Browser, Page } from 'playwright-core';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { axeFaults, journey, openBrowser, openPage, scrollsSideways } from './browser.ts';
import { startApp, type RunningApp } from './running-app.ts';

let app: RunningApp;
let browser: Browser;

beforeAll(async () => {
  app = await startApp();
  browser = await openBrowser();
});
afterAll(async () => {
  await browser?.close();
  await app?.stop();
});

const owner = {
  name: 'Ilse Marrow',
  email: 'ilse@marrow.example',
  password: 'slate heron under cedar',
  team: 'Marrow Kinetics',
};
const finance = { name: 'Odd Penny', email: 'odd@marrow.example', password: 'ledger otter winter boots' };

/** The newest link of that path in a mail to `to`, once it has arrived. */
async function linkFromMail(to: string, path: string): Promise<string> {
  const deadline = Date.now() + 30_000;
  while (Date.now() < deadline) {
    const answer = await fetch(`${app.mailboxUrl}/messages?to=${encodeURIComponent(to)}`);
    const { messages } = (await answer.json()) as { messages: { text: string }[] };
    const links = messages
      .flatMap(({ text }) => text.match(/https?:\/\/\S+/g) ?? [])
      .filter((link) => link.includes(path));
    if (links[0]) return links[0];
    await new Promise((resolve) => setTimeout(resolve, 200));
  }
  throw new Error(`No mail to ${to} with a link to ${path} arrived.`);
}

/** Every page is looked at as it stands: no axe fault, no sideways scroll at this width. */
async function lookAt(page: Page): Promise<void> {
  expect(await axeFaults(page)).toEqual([]);
  expect(await scrollsSideways(page), `${page.url()} scrolls sideways`).toBe(false);
}

/** Types one row into a grid: values in column order, Tab between them. */
async function typeRow(page: Page, cells: (string | null)[]): Promise<void> {
  for (const [index, cell] of cells.entries()) {
    if (cell !== null) await page.keyboard.type(cell);
    if (index < cells.length - 1) await page.keyboard.press('Tab');
  }
  await page.keyboard.press('Enter');
}

const cell = (page: Page, grid: string, row: number, column: number) =>
  page.getByRole('region', { name: new RegExp(`^${grid}`) }).locator(`[data-row="${row}"][data-column="${column}"]`);

describe('the main job', () => {
  it('goes from an empty installation to a checked archive and a downloaded invoice', async () => {
    const { page, faults } = await openPage(browser);

    let invitation = '';
    await journey(page, 'main-job', async () => {
      // Sign up and verify.
      await page.goto(`${app.url}/sign-up`);
      await lookAt(page);
      await page.getByLabel('Your name').fill(owner.name);
      await page.getByLabel('E-mail').fill(owner.email);
      await page.getByLabel('Password').fill(owner.password);
      await page.getByLabel('Team name').fill(owner.team);
      await page.getByRole('button', { name: 'Sign up' }).click();
      await page.goto(await linkFromMail(owner.email, '/verify'));
      await lookAt(page);
      await page.getByLabel('Password').fill(owner.password);
      await page.getByRole('button', { name: 'Confirm the address' }).click();
      await page.waitForURL(/\/t\/marrow-kinetics\/overview/);
      await lookAt(page);

      // Top up: declined, then accepted.
      await page.getByRole('link', { name: 'Buy credits' }).first().click();
      await page.waitForURL(/\/credits/);
      await lookAt(page);
      await page.getByRole('radio', { name: /100 credits/ }).check();
      await page.getByRole('button', { name: /Go on to pay/ }).click();
      await page.waitForURL(/\/pay\//);
      await page.getByLabel('Card number').fill('4000 0000 0000 0002');
      await page.getByRole('button', { name: /^Pay/ }).click();
      await page
        .getByRole('alert')
        .getByText(/declined/i)
        .waitFor();
      await page.getByLabel('Card number').fill('4242 4242 4242 4242');
      await page.getByRole('button', { name: /^Pay/ }).click();
      await page.waitForURL(/\/credits\?/);
      await page.getByText(/^Paid: 100 credits/).waitFor();
      await lookAt(page);

      // A model, by keyboard alone.
      await page.goto(`${app.url}/t/marrow-kinetics/models/new`);
      await page.getByLabel('Name of the model').fill('Dimer in a vesicle');
      await cell(page, 'Species', 0, 0).focus();
      await typeRow(page, ['P', '80']);
      await typeRow(page, ['D', '0']);
      await cell(page, 'Parameters', 0, 0).focus();
      await typeRow(page, ['k_join', '0.004']);
      await typeRow(page, ['k_part', '0.05']);
      await cell(page, 'Reactions', 0, 0).focus();
      await typeRow(page, ['join', '2 P -> D', null, 'k_join']);
      await typeRow(page, ['part', 'D -> 2 P', null, 'k_prt']);
      await page.getByText(/k_prt/).first().waitFor();
      await cell(page, 'Reactions', 1, 3).fill('k_part');
      await page.getByText(/P \+ 2 D = 80/).waitFor();
      await page.getByRole('img', { name: /^Preview: P in 24 replicates, rate equation dashed/ }).waitFor();
      await lookAt(page);
      await page.getByRole('button', { name: 'Create the model' }).press('Enter');
      await page.waitForURL(/\/models\/model_/);
      await lookAt(page);

      // Quote, launch, watch.
      await page.getByRole('link', { name: /^Launch version 1/ }).click();
      await page.waitForURL(/\/jobs\/new/);
      await page.getByLabel('Replicates', { exact: true }).fill('5000');
      await page.getByLabel('Horizon').fill('20');
      const launch = page.getByRole('button', { name: /^Launch for up to/ });
      await launch.waitFor();
      await lookAt(page);
      // The cap offered is the quote's upper estimate, which stops one job in forty.
      const cap = page.getByLabel('Cap');
      await cap.fill(String(1.1 * Number(await cap.getAttribute('placeholder'))));
      await launch.click();
      await page.waitForURL(/\/jobs\/job_/);
      await page.getByText('Done', { exact: true }).first().waitFor({ timeout: 60_000 });
      await page.getByText(/5,000 of 5,000/).waitFor();
      await lookAt(page);

      // Read results: every tab, then after a reload again.
      for (const tab of ['Distribution', 'Traces', 'Numbers', 'Time course']) {
        await page.getByRole('tab', { name: tab }).click();
        await page.getByRole('tabpanel').waitFor();
      }
      await page.reload();
      await page.getByText(/5,000 of 5,000/).waitFor();

      // The archive and its checksums.
      const [download] = await Promise.all([
        page.waitForEvent('download'),
        page.getByRole('link', { name: /^Download,/ }).click(),
      ]);
      const archive = await readFile((await download.path())!);
      const sha256 = (bytes: Uint8Array) => createHash('sha256').update(bytes).digest('hex');
      await page.getByText(sha256(archive)).waitFor();
      const files = unzipSync(archive);
      const sums = new TextDecoder().decode(files['SHA256SUMS']).trim().split('\n');
      expect(sums.length).toBe(Object.keys(files).length - 1);
      for (const line of sums) {
        const [sum, name] = line.split(/\s+\*?/) as [string, string];
        expect(sha256(files[name]!), name).toBe(sum);
      }

      // Finance is invited, signs up by the link, and downloads the invoice.
      await page.goto(`${app.url}/t/marrow-kinetics/team/members`);
      await lookAt(page);
      await page.getByLabel('E-mail').fill(finance.email);
      await page
        .getByRole('checkbox', { name: /finance/i })
        .first()
        .check();
      await page.getByRole('button', { name: /invit/i }).first().click();
      invitation = await linkFromMail(finance.email, '/invitation');
    });
    expect(faults).toEqual([]);
    await page.context().close();
    await financeDownloadsInvoice(invitation);
  });

  async function financeDownloadsInvoice(invitation: string): Promise<void> {
    const { page, faults } = await openPage(browser);
    await journey(page, 'finance', async () => {
      await page.goto(invitation);
      await lookAt(page);
      await page.getByLabel('Your name').fill(finance.name);
      await page.getByLabel('Password').fill(finance.password);
      await page.getByRole('button', { name: /join|accept/i }).click();
      await page.waitForURL(/\/t\/marrow-kinetics\//);
      await page.locator('details[data-menu] summary').click();
      await page.getByRole('button', { name: 'Sign out' }).click();
      await page.waitForURL((url) => !url.pathname.startsWith('/t/'));
      await page.goto(`${app.url}/t/marrow-kinetics/billing/invoices`);
      await page.waitForURL(/\/sign-in/);
      await page.getByLabel('E-mail').fill(finance.email);
      await page.getByLabel('Password').fill(finance.password);
      await page.getByRole('button', { name: 'Sign in' }).click();
      await page.waitForURL(/billing\/invoices/);
      await lookAt(page);
      await page
        .getByRole('link', { name: /BUR-\d{4}-00001/ })
        .first()
        .click();
      await page.waitForURL(/invoices\/invoice_/);
      await lookAt(page);
      const [download] = await Promise.all([
        page.waitForEvent('download'),
        page.getByRole('link', { name: /PDF/ }).first().click(),
      ]);
      const pdf = await readFile((await download.path())!);
      expect(pdf.subarray(0, 5).toString()).toBe('%PDF-');
    });
    expect(faults).toEqual([]);
    await page.context().close();
  }
});
