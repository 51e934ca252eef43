/**
 * Money in a real browser, on the demo: finance saves a card that is declined when it is charged later, automatic top-up
 * goes off and the owner gets a mail, another card cures it until the month's ceiling; a payment is disputed and lost,
 * launching is suspended, an operator settles what is owed and refunds unused credits. axe looks at every page.
 */
import { readFile } from 'node:fs/promises';
import path from 'node:path';
import type { Browser, Page } from 'playwright-core';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { axeFaults, journey, openBrowser, openPage, scrollsSideways } from './browser.ts';
import { startApp, type RunningApp } from './running-app.ts';

let app: RunningApp;
let browser: Browser;
const passwords = new Map<string, string>();
beforeAll(async () => {
  app = await startApp({ seed: true });
  browser = await openBrowser();
  const people = JSON.parse(await readFile(path.join(app.dataDir, 'demo-people.json'), 'utf8')) as {
    email: string;
    password: string;
  }[];
  for (const { email, password } of people) passwords.set(email, password);
}, 240_000);
afterAll(async () => {
  await browser?.close();
  await app?.stop();
});

async function signIn(email: string, width = 1440): Promise<{ page: Page; faults: string[] }> {
  const opened = await openPage(browser, { viewport: { width, height: 900 } });
  await opened.page.goto(`${app.url}/sign-in`);
  await opened.page.getByLabel('E-mail').fill(email);
  await opened.page.getByLabel('Password').fill(passwords.get(email)!);
  await opened.page.getByRole('button', { name: 'Sign in' }).click();
  await opened.page.waitForURL((url) => !url.pathname.startsWith('/sign-in'));
  return opened;
}
async function lookAt(page: Page): Promise<void> {
  expect(await axeFaults(page)).toEqual([]);
  expect(await scrollsSideways(page), `${page.url()} scrolls sideways`).toBe(false);
}
async function mailsTo(to: string): Promise<{ subject: string; text: string }[]> {
  const answer = await fetch(`${app.mailboxUrl}/messages?to=${encodeURIComponent(to)}`);
  return ((await answer.json()) as { messages: { subject: string; text: string }[] }).messages;
}
/** The card is typed on the fake's hosted page. */
async function saveCard(page: Page, button: string, number: string): Promise<void> {
  await page.getByRole('button', { name: button }).click();
  await page.getByLabel('Card number').fill(number);
  await page.getByText('No money moves').waitFor();
  await page.getByRole('button', { name: 'Save this card' }).click();
  await page.getByText(`ending ${number.slice(-4)}`).waitFor();
}
/** The charge follows the answer: what the page says once it is decided. */
async function switchOn(page: Page, words: string): Promise<void> {
  await page.getByRole('button', { name: 'Switch it on' }).click();
  await page.getByText('Automatic top-up is on.').waitFor();
  await expect
    .poll(
      async () => {
        await page.reload();
        return page.getByText(words).count();
      },
      { timeout: 30_000 },
    )
    .toBe(1);
}
const control = (what: string, fields: Record<string, string>) =>
  fetch(`${app.paymentUrl}/_fake/${what}`, { method: 'POST', body: new URLSearchParams(fields).toString() });
const fakeState = async () =>
  (await (await fetch(`${app.paymentUrl}/_fake/state`)).json()) as {
    intents: Record<string, { id: string; status: string }>;
    disputes: Record<string, { id: string }>;
  };

describe('money', () => {
  it('tops up by itself until a card is declined, and again with another', async () => {
    const { page, faults } = await signIn('finance@tarnfell.example', 390);
    await journey(page, 'automatic-top-up', async () => {
      await page.goto(`${app.url}/t/tarn-fell/billing/automatic-top-up`);
      await page.getByText('Not set up').waitFor();
      await lookAt(page);
      await saveCard(page, 'Save a card', '4000 0000 0000 0341');
      await page.getByLabel('Buy when less is available than').fill('1000');
      await page.getByLabel('Currency').selectOption('GBP');
      // By hand: 100 credits are GBP 83 and 20 % tax, 99.60; one fits under 150, two do not.
      await page.getByLabel('Charge at most per month').fill('150');
      await switchOn(page, 'Switched off: a payment did not pass');
      await page.getByText('Did not pass', { exact: true }).waitFor();
      await lookAt(page);
      await expect
        .poll(async () => (await mailsTo('owner@tarnfell.example')).map(({ subject }) => subject), { timeout: 30_000 })
        .toContainEqual(expect.stringContaining('did not pass and is switched off'));

      await saveCard(page, 'Replace the card', '5555 5555 5555 4444');
      await switchOn(page, 'On, and at its ceiling for this month');
      await page.getByText('Paid', { exact: true }).waitFor();
      await lookAt(page);
      await page.getByRole('link', { name: 'Open', exact: true }).click();
      await page.getByText('Payment confirmed, credits issued').waitFor();
    });
    expect(faults).toEqual([]);
    await page.context().close();
  });

  it('suspends launching after a lost dispute until an operator settles it, and refunds what is unused', async () => {
    const [first] = Object.values((await fakeState()).intents).filter(({ status }) => status === 'succeeded');
    await control('disputes', { paymentIntent: first!.id });
    const finance = await signIn('finance@tarnfell.example');
    const staff = await signIn('operator@burette.example');
    await journey(finance.page, 'disputes', async () => {
      const { page } = finance;
      await expect
        .poll(
          async () => {
            await page.goto(`${app.url}/t/tarn-fell/billing/invoices`);
            return page.getByText('A payment is disputed').count();
          },
          { timeout: 30_000 },
        )
        .toBe(1);
      await lookAt(page);
      const [dispute] = Object.values((await fakeState()).disputes);
      await control('disputes/decide', { dispute: dispute!.id, status: 'lost' });
      await expect
        .poll(
          async () => {
            await page.reload();
            return page.getByText('No job can be launched: a payment is owed').count();
          },
          { timeout: 30_000 },
        )
        .toBe(1);
      await page.getByRole('link', { name: /the invoice$/ }).click();
      await page.getByText('launching is suspended').waitFor();
      await lookAt(page);
    });
    await journey(staff.page, 'operator-disputes', async () => {
      const { page } = staff;
      await page.goto(`${app.url}/operate/disputes`);
      await lookAt(page);
      await page.getByLabel('Reason').fill('Paid by transfer.');
      await page.getByRole('button', { name: 'It is paid' }).click();
      await page.getByText('Settled').waitFor();
      await page.goto(`${app.url}/operate/books`);
      await lookAt(page);
      await page.goto(`${app.url}/operate/invoices`);
      await page.getByLabel('Number').fill(`bur-${new Date().getUTCFullYear()}-00002`);
      await page.getByRole('button', { name: 'Open it' }).click();
      await page.getByText('credits are unused and can be refunded').waitFor();
      await lookAt(page);
      await page.getByLabel('Credits to take back').fill('10');
      await page.getByLabel('Reason').fill('Bought too many.');
      await page.getByRole('button', { name: 'Refund and issue the credit note' }).click();
      // By hand: a tenth of GBP 99.60.
      await page.getByText('9.96 are on their way').waitFor();
      await page.getByText('Sent back').waitFor();
      await lookAt(page);
    });
    await finance.page.reload();
    expect(await finance.page.getByText('No job can be launched').count()).toBe(0);
    expect([...finance.faults, ...staff.faults]).toEqual([]);
  });
});
