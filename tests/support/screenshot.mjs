// Takes pictures of pages for the eye: node tests/support/screenshot.mjs OUT_FOLDER BASE_URL [--cookie NAME=VALUE] [--one] PATH …
// Each path at 1440 and 390 pixels, light and dark (`--one`: 1440 light only). Prints console errors and sideways scroll.
import { mkdirSync } from 'node:fs';
import path from 'node:path';
import { chromium } from 'playwright-core';

const args = process.argv.slice(2);
const take = (flag, values) => {
  const at = args.indexOf(flag);
  return at < 0 ? null : args.splice(at, values + 1)[values];
};
const cookie = take('--cookie', 1);
const one = take('--one', 0) !== null;
const [folder, base, ...pages] = args;
if (!folder || !base || pages.length === 0) {
  console.error('Usage: node tests/support/screenshot.mjs OUT_FOLDER BASE_URL [--cookie NAME=VALUE] [--one] PATH …');
  process.exit(2);
}
mkdirSync(folder, { recursive: true });

const browser = await chromium.launch({
  executablePath: process.env.CHROMIUM_PATH ?? '/usr/bin/chromium',
  args: ['--no-sandbox', '--disable-gpu'],
});
for (const width of one ? [1440] : [1440, 390])
  for (const colorScheme of one ? ['light'] : ['light', 'dark']) {
    const context = await browser.newContext({ viewport: { width, height: width > 500 ? 900 : 844 }, colorScheme });
    if (cookie) {
      const [name, ...value] = cookie.split('=');
      await context.addCookies([{ name, value: value.join('='), url: base }]);
    }
    for (const address of pages) {
      const page = await context.newPage();
      page.on('console', (message) => {
        if (['error', 'warning'].includes(message.type())) console.log(`${address} ${width}: ${message.text()}`);
      });
      page.on('pageerror', (error) => console.log(`${address} ${width}: ${error.message}`));
      await page.goto(base + address, { waitUntil: 'networkidle' });
      const wide = await page.evaluate(() => document.documentElement.scrollWidth - innerWidth);
      if (wide > 0) console.log(`${address} ${width}: ${wide} px too wide`);
      const name = address.replace(/[^\w-]+/g, '_').replace(/^_|_$/g, '') || 'home';
      await page.screenshot({
        path: path.join(folder, `${name}-${width}-${colorScheme}.png`),
        fullPage: true,
        caret: 'initial',
      });
      await page.close();
    }
    await context.close();
  }
await browser.close();
