/** A headless Chromium for the journeys; every page error, console error and CSP refusal is collected and must stay empty. */
import AxeBuilder from '@axe-core/playwright';
import { chromium, type Browser, type BrowserContextOptions, type Page } from 'playwright-core';

export async function openBrowser(): Promise<Browser> {
  return chromium.launch({
    executablePath: process.env['CHROMIUM_PATH'] ?? '/usr/bin/chromium',
    args: [
      '--no-sandbox',
      '--disable-gpu',
      '--disable-quic',
      '--no-first-run',
      '--disable-background-networking',
      '--disable-component-update',
      '--disable-sync',
    ],
  });
}

/** `faults` fills as the page goes; a journey ends by expecting it to be empty. */
export async function openPage(
  browser: Browser,
  options: BrowserContextOptions = {},
): Promise<{ page: Page; faults: string[] }> {
  const context = await browser.newContext({
    viewport: { width: 1440, height: 900 },
    acceptDownloads: true,
    ...options,
  });
  const page = await context.newPage();
  // Waiting is for conditions; how long one takes on a busy machine is not what a journey checks.
  page.setDefaultTimeout(90_000);
  const faults: string[] = [];
  page.on('pageerror', (error) => faults.push(`page error at ${page.url()}: ${error.message}`));
  page.on('console', (message) => {
    // A refused request (409, 422 …) is part of some journeys; the browser reports each as an error of its own.
    if (message.type() === 'error' && !message.text().startsWith('Failed to load resource'))
      faults.push(`console at ${page.url()}: ${message.text()}`);
  });
  return { page, faults };
}

/** What axe finds wrong on the present page once its islands are live, as readable lines (WCAG 2.2 A and AA). */
export async function axeFaults(page: Page): Promise<string[]> {
  await page.waitForFunction(() => document.querySelector('astro-island[ssr][client="load"]') === null);
  const { violations } = await new AxeBuilder({ page })
    .withTags(['wcag2a', 'wcag2aa', 'wcag21a', 'wcag21aa', 'wcag22aa'])
    .analyze();
  return violations.flatMap(({ id, help, nodes }) =>
    nodes.map((node) => `${page.url()} ${id}: ${help} — ${node.html.slice(0, 160)}`),
  );
}

/** Whether the page is wider than its window. */
export const scrollsSideways = (page: Page): Promise<boolean> =>
  page.evaluate(() => document.documentElement.scrollWidth > document.documentElement.clientWidth + 1);

/** Runs a journey; when it fails, what the page showed stands beside the reports, and its words in the error. */
export async function journey(page: Page, name: string, walk: () => Promise<void>): Promise<void> {
  try {
    await walk();
  } catch (error) {
    const picture = `node_modules/.cache/burette-tests/${name}.png`;
    await page.screenshot({ path: picture, fullPage: true }).catch(() => undefined);
    const words = await page
      .locator('body')
      .innerText()
      .catch(() => '');
    console.error(`${name} failed at ${page.url()} (picture: ${picture}):\n${words.slice(0, 4_000)}`);
    throw error;
  }
}
