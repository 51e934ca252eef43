/**
 * The face of the product on the seeded demo: every public, account, team and money page in both themes and at both widths
 * without an axe fault (WCAG 2.2 A and AA, axe-core's rules), console error or sideways scroll; pages that work without
 * script; the column's words; what owner and finance do on their pages.
 */
import { readFile } from 'node:fs/promises';
import path from 'node:path';
import type { Browser, BrowserContextOptions, Page } from 'playwright-core';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { axeFaults, openBrowser, openPage, scrollsSideways } from './browser.ts';
import { startApp, type RunningApp } from './running-app.ts';

let app: RunningApp;
let browser: Browser;
const passwords = new Map<string, string>();
const team = '/t/tarn-fell';

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

async function signIn(role: string, options: BrowserContextOptions = {}): Promise<{ page: Page; faults: string[] }> {
  const opened = await openPage(browser, options);
  const email = `${role}@tarnfell.example`;
  await opened.page.goto(`${app.url}/sign-in`);
  await opened.page.getByLabel('E-mail').fill(email);
  await opened.page.getByLabel('Password').fill(passwords.get(email)!);
  await opened.page.getByRole('button', { name: 'Sign in' }).click();
  await opened.page.waitForURL(`**${team}/overview`);
  return opened;
}

async function lookAt(page: Page, address: string): Promise<void> {
  await page.goto(app.url + address, { waitUntil: 'networkidle' });
  expect(await axeFaults(page)).toEqual([]);
  expect(await scrollsSideways(page), `${address} scrolls sideways`).toBe(false);
}

const publicPages = [
  '/',
  '/pricing',
  '/docs',
  '/docs/quick-start',
  '/docs/methods',
  '/docs/limits',
  '/security',
  '/status',
  '/terms',
  '/privacy',
  '/sign-in',
  '/sign-up',
  '/reset',
  '/reset?token=none',
  '/verify?token=none',
  '/invitation?token=none',
  '/no-such-page',
];
const ownerPages = [
  `${team}/overview`,
  `${team}/credits`,
  `${team}/billing/invoices`,
  `${team}/credits/ledger`,
  `${team}/billing/statements`,
  `${team}/billing/statements/${new Date().toISOString().slice(0, 7)}`,
  `${team}/billing/budget`,
  `${team}/billing/pro-formas`,
  `${team}/billing/details`,
  `${team}/team/members`,
  `${team}/team/project-codes`,
  `${team}/team/tokens`,
  `${team}/team/webhooks`,
  '/account',
];

describe.each([
  ['light', 1440],
  ['dark', 1440],
  ['light', 390],
  ['dark', 390],
] as const)('pages in the %s theme at %i pixels', (colorScheme, width) => {
  const options = { colorScheme, viewport: { width, height: 900 } };

  it('have no axe fault, console error or sideways scroll for anybody', async () => {
    const { page, faults } = await openPage(browser, options);
    for (const address of publicPages) await lookAt(page, address);
    expect(faults).toEqual([]);
    await page.context().close();
  });

  it('have none for an owner, an invoice included', async () => {
    const { page, faults } = await signIn('owner', options);
    for (const address of ownerPages) await lookAt(page, address);
    await page.goto(`${app.url}${team}/billing/invoices`);
    const invoice = await page.getByRole('link', { name: /^BUR-/ }).first().getAttribute('href');
    await lookAt(page, invoice!);
    expect(faults).toEqual([]);
    await page.context().close();
  });
});

describe('pages of the operator', () => {
  it.each([
    ['light', 1440],
    ['dark', 390],
  ] as const)(
    'in the %s theme at %i pixels have no axe fault, console error or sideways scroll',
    async (theme, width) => {
      const options = { colorScheme: theme, viewport: { width, height: 900 } };
      const { page, faults } = await openPage(browser, options);
      const email = 'operator@burette.example';
      await page.goto(`${app.url}/sign-in`);
      await page.getByLabel('E-mail').fill(email);
      await page.getByLabel('Password').fill(passwords.get(email)!);
      await page.getByRole('button', { name: 'Sign in' }).click();
      await page.waitForURL((url) => !url.pathname.startsWith('/sign-in'));
      for (const name of ['books', 'transfers', 'invoices', 'credits', 'price-book', 'acts'])
        await lookAt(page, `/operate/${name}`);
      expect(faults).toEqual([]);
      await page.context().close();
    },
  );
});

describe('without script', () => {
  it('somebody signs in, reads overview, credits and an invoice, and signs out', async () => {
    const { page } = await signIn('finance', { javaScriptEnabled: false });
    expect(await page.getByRole('heading', { level: 1 }).textContent()).toBe('Tarn & Fell Modelling');
    await page.getByRole('link', { name: 'Credits', exact: true }).click();
    expect(await page.getByRole('heading', { name: 'Ledger' }).isVisible()).toBe(true);
    const ledger = page.getByRole('table', { name: /Ledger entries/ });
    expect(await ledger.getByText('Charge', { exact: true }).first().isVisible()).toBe(true);
    await page.getByRole('link', { name: 'Billing', exact: true }).click();
    await page.getByRole('link', { name: /^BUR-/ }).first().click();
    expect(await page.getByRole('link', { name: 'Download the PDF' }).isVisible()).toBe(true);
    await page.locator('details[data-menu] summary').click();
    await page.getByRole('button', { name: 'Sign out' }).click();
    await page.waitForURL(`${app.url}/`);
    expect(await page.getByRole('link', { name: 'Sign in' }).isVisible()).toBe(true);
    await page.context().close();
  });
});

describe('the graduated column', () => {
  it('says in words what it shows and follows the quote on the page', async () => {
    const { page } = await signIn('modeller');
    const column = page.getByRole('img', { name: /credits available/ }).first();
    expect(await column.getAttribute('aria-label')).toMatch(/^[\d.,]+ credits available\.$/);
    // Told again until the column has come to life and listens.
    await page.waitForFunction(() => {
      window.dispatchEvent(
        new CustomEvent('burette:quote', { detail: { expectedMicrocredits: 5_000_000, highMicrocredits: 6_000_000 } }),
      );
      return document.querySelector('[role="img"][aria-label*="after the quote on this page"]') !== null;
    });
    await page.context().close();
  });
});

describe('what people do', () => {
  it('an owner makes a project code, a token that works until it is revoked, and invites somebody who joins', async () => {
    const { page, faults } = await signIn('owner');
    await page.goto(`${app.url}${team}/team/project-codes`, { waitUntil: 'networkidle' });
    await page.getByLabel('Code', { exact: true }).fill('not valid');
    await page.getByRole('button', { name: 'Create the code' }).click();
    await page.getByText(/starting with a letter or digit/).waitFor();
    await page.getByLabel('Code', { exact: true }).fill('HELM-3');
    await page.getByLabel('Client (optional)').fill('Helmsdale Fisheries');
    await page.getByRole('button', { name: 'Create the code' }).click();
    await page.getByRole('cell', { name: 'HELM-3', exact: true }).waitFor();
    await page.getByRole('button', { name: 'Close HELM-3' }).click();
    await page.getByRole('button', { name: 'Reopen HELM-3' }).waitFor();

    await page.goto(`${app.url}${team}/team/tokens`, { waitUntil: 'networkidle' });
    await page.getByLabel('Name').fill('nightly report');
    await page.getByRole('button', { name: 'Create the token' }).click();
    const secret = (await page.locator('code').first().textContent())!.trim();
    const credits = (): Promise<Response> =>
      fetch(`${app.url}/api/v1/teams/tarn-fell/credits`, { headers: { Authorization: `Bearer ${secret}` } });
    expect((await credits()).status).toBe(200);
    await page.getByRole('button', { name: 'Done' }).click();
    expect(await page.getByText(secret).count()).toBe(0);
    await page.getByRole('button', { name: 'Revoke nightly report' }).click();
    await page.getByRole('button', { name: 'Revoke the token' }).click();
    await page.getByRole('heading', { name: 'Revoked' }).waitFor();
    expect((await credits()).status).toBe(401);

    const guest = 'guest@helmsdale.example';
    await page.goto(`${app.url}${team}/team/members`, { waitUntil: 'networkidle' });
    await page.getByLabel('E-mail').fill(guest);
    await page.getByRole('button', { name: 'Send the invitation', exact: true }).click();
    await page.getByText(`An invitation is on its way to ${guest}.`).waitFor();
    expect(faults).toEqual([]);
    await page.context().close();

    const joining = await openPage(browser);
    await joining.page.goto(await invitationLink(guest));
    await joining.page.getByLabel('Your name').fill('Gair Helm');
    await joining.page.getByLabel('Password').fill('skiff kettle marram nine');
    await joining.page.getByRole('button', { name: 'Join the team' }).click();
    await joining.page.waitForURL(`**${team}/overview`);
    expect(joining.faults).toEqual([]);
    await joining.page.context().close();
  });

  it('finance sets billing details, asks for a pro-forma and approves an invoice', async () => {
    const { page, faults } = await signIn('finance');
    await page.goto(`${app.url}${team}/billing/details`, { waitUntil: 'networkidle' });
    await page.getByLabel('Country').fill('1');
    await page.getByRole('button', { name: 'Save the details' }).click();
    await page.getByText('Two letters, such as DE.').nth(1).waitFor();
    await page.getByLabel('Country').fill('GB');
    await page.getByRole('button', { name: 'Save the details' }).click();
    await page.getByText('Saved. The next invoice uses these details.').waitFor();

    await page.goto(`${app.url}${team}/billing/pro-formas`, { waitUntil: 'networkidle' });
    await page.getByLabel('PO number').fill('PO 77-A');
    await page.getByRole('button', { name: 'Ask for the pro-forma' }).click();
    await page.getByRole('cell', { name: 'PO 77-A' }).waitFor();

    await page.goto(`${app.url}${team}/billing/invoices?review=to_review`);
    await page.getByRole('link', { name: /^BUR-/ }).first().click();
    await page.waitForLoadState('networkidle');
    await page.getByRole('button', { name: 'Approve' }).click();
    await page
      .getByText('Approved by')
      .or(page.getByText(/Approved.*by/))
      .first()
      .waitFor();
    expect(faults).toEqual([]);
    await page.context().close();
  });

  it('a viewer is not shown what they may not do, and is told so at the address', async () => {
    const { page } = await signIn('viewer');
    expect(await page.getByRole('link', { name: 'Billing', exact: true }).count()).toBe(0);
    const answer = await page.goto(`${app.url}${team}/billing/invoices`);
    expect(answer?.status()).toBe(403);
    const other = await page.goto(`${app.url}/t/kestrel-bay/overview`);
    expect(other?.status()).toBe(404);
    await page.context().close();
  });

  it('signed out, the page asked for opens after signing in', async () => {
    const { page } = await openPage(browser);
    await page.goto(`${app.url}${team}/credits`);
    expect(new URL(page.url()).pathname).toBe('/sign-in');
    await page.getByLabel('E-mail').fill('viewer@tarnfell.example');
    await page.getByLabel('Password').fill(passwords.get('viewer@tarnfell.example')!);
    await page.getByRole('button', { name: 'Sign in' }).click();
    await page.waitForURL(`**${team}/credits`);
    await page.context().close();
  });
});

async function invitationLink(to: string): Promise<string> {
  const deadline = Date.now() + 30_000;
  while (Date.now() < deadline) {
    const answer = await fetch(`${app.mailboxUrl}/messages?to=${encodeURIComponent(to)}`);
    const { messages } = (await answer.json()) as { messages: { text: string }[] };
    const link = messages.flatMap(({ text }) => text.match(/https?:\/\/\S+\/invitation\S+/g) ?? [])[0];
    if (link) return link;
    await new Promise((resolve) => setTimeout(resolve, 200));
  }
  throw new Error(`No invitation to ${to} arrived.`);
}
