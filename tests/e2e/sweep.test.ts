/** A sweep from the launch page to its figures: two quantities, points seen before paying, heat map, curves, one point. */
import { readFile } from 'node:fs/promises';
import path from 'node:path';
import type { Browser } from 'playwright-core';
import { afterAll, beforeAll, expect, it } from 'vitest';
import { axeFaults, journey, openBrowser, openPage, scrollsSideways } from './browser.ts';
import { startApp, type RunningApp } from './running-app.ts';

const email = 'modeller@tarnfell.example';
let app: RunningApp;
let browser: Browser;
beforeAll(async () => {
  app = await startApp({ seed: true });
  browser = await openBrowser();
}, 240_000);
afterAll(async () => {
  await browser?.close();
  await app?.stop();
});

it('is built, run and read', async () => {
  const { page, faults } = await openPage(browser);
  const look = async (name: string): Promise<void> => {
    if (process.env['LOOK']) await page.screenshot({ path: `${process.env['LOOK']}/${name}.png`, fullPage: true });
  };
  await journey(page, 'sweep', async () => {
    const people = JSON.parse(await readFile(path.join(app.dataDir, 'demo-people.json'), 'utf8')) as {
      email: string;
      password: string;
    }[];
    await page.goto(`${app.url}/sign-in`);
    await page.getByLabel('E-mail').fill(email);
    await page.getByLabel('Password').fill(people.find((person) => person.email === email)!.password);
    await page.getByRole('button', { name: 'Sign in' }).click();
    await page.waitForURL('**/overview');
    await page.goto(`${app.url}/t/tarn-fell/jobs/new`);
    await page.getByLabel('Replicates', { exact: true }).fill('400');
    await page.getByLabel('Horizon').fill('20');
    await page.getByLabel('Grid intervals').fill('10');
    await page.getByLabel('Points', { exact: true }).selectOption('grid');
    const targets = page.getByLabel('Vary', { exact: true });
    const names = await targets.first().locator('option').allTextContents();
    await page.getByLabel('Values', { exact: true }).fill('0.5, 1 2');
    await page.getByRole('button', { name: 'Vary one more quantity' }).click();
    await page.getByLabel('By', { exact: true }).nth(1).selectOption('log');
    await page.getByLabel('From').fill('0.1');
    await page.getByLabel('To', { exact: true }).fill('-1');
    await page.getByText('A range ends above where it begins.').waitFor();
    await page.getByLabel('To', { exact: true }).fill('0.4');
    await page.getByLabel('Values', { exact: true }).nth(1).fill('3');
    // The quote's own cap would stop one job in forty.
    await page.getByLabel('Cap').fill('5');
    await page.getByText('9 points × 400 replicates = 3,600 replicates').click();
    await page.getByRole('region', { name: 'Points of the sweep' }).getByRole('row').nth(9).waitFor();
    expect(await axeFaults(page)).toEqual([]);
    const launch = page.getByRole('button', { name: /^Launch/ });
    await launch.waitFor();
    await page.waitForFunction(() =>
      [...document.querySelectorAll('button')].some(
        (button) => /^Launch/.test(button.textContent ?? '') && !button.disabled,
      ),
    );
    await look('launch');
    await launch.click();
    await page.waitForURL(/\/jobs\/job_/);
    await page
      .getByText(`Sweep of ${names.length > 0 ? '' : ''}`)
      .first()
      .waitFor();
    await page.getByRole('tab', { name: 'Sweep' }).waitFor();
    await page.getByRole('tabpanel').locator('figure').first().waitFor();
    await page
      .getByText(/at 9 points from 400 replicates each/)
      .first()
      .waitFor({ state: 'attached' });
    await look('map');
    expect(await axeFaults(page)).toEqual([]);
    await page.getByLabel('Drawn as').selectOption('curves');
    await look('curves');
    await page.getByRole('tab', { name: 'Time course' }).click();
    await page.getByLabel('Point of the sweep').selectOption('4');
    await page.waitForURL(/point=4/);
    await page.getByRole('tabpanel').locator('figure').first().waitFor();
    await look('point');
    await page.setViewportSize({ width: 390, height: 900 });
    await page.getByRole('tab', { name: 'Sweep' }).click();
    expect(await scrollsSideways(page)).toBe(false);
    await look('phone');
    expect(faults).toEqual([]);
  });
});
