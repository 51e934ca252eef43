/**
 * The same job gives the same results on every machine and browser: one bundle of the engine, run in Node and in headless
 * Chromium, on every demo model and in every form of the direct method and of tau-leaping. This is our own promise; there is nothing outside
 * the project to compare with.
 */
import { build } from 'esbuild';
import { mkdtemp, rm, writeFile } from 'node:fs/promises';
import { tmpdir } from 'node:os';
import path from 'node:path';
import { pathToFileURL } from 'node:url';
import type { Browser } from 'playwright-core';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { demoModels } from '@db/seeds/demo-models.ts';
import { projectRoot } from '@/server/project-root.ts';
import { leaped, type Digests } from './engine-digests.ts';
import { openBrowser } from './browser.ts';

let folder: string;
let browser: Browser;
let inNode: Digests;
let inBrowser: Digests;

beforeAll(async () => {
  folder = await mkdtemp(path.join(tmpdir(), 'burette-engine-'));
  const outfile = path.join(folder, 'engine.mjs');
  await build({
    entryPoints: [path.join(projectRoot, 'tests/e2e/engine-digests.ts')],
    bundle: true,
    format: 'esm',
    outfile,
    tsconfig: path.join(projectRoot, 'tsconfig.json'),
    logLevel: 'error',
  });
  const own = (await import(pathToFileURL(outfile).href)) as { engineDigests: () => Promise<Digests> };
  inNode = await own.engineDigests();
  browser = await openBrowser();
  const page = await browser.newPage();
  await writeFile(path.join(folder, 'empty.html'), '<!doctype html><title>engine</title>');
  await page.goto(pathToFileURL(path.join(folder, 'empty.html')).href);
  const { outputFiles } = await build({
    stdin: {
      contents: `import { engineDigests } from '${outfile}'; globalThis.engineDigests = engineDigests;`,
      resolveDir: folder,
    },
    bundle: true,
    format: 'iife',
    write: false,
    logLevel: 'error',
  });
  await page.addScriptTag({ content: outputFiles[0]!.text });
  inBrowser = await page.evaluate(() =>
    (globalThis as unknown as { engineDigests: () => Promise<Digests> }).engineDigests(),
  );
}, 300_000);
afterAll(async () => {
  await browser?.close();
  await rm(folder, { recursive: true, force: true });
});

describe.each([...demoModels.map(({ name }) => name), leaped])('%s', (name) => {
  it('has the same summary, events and traces in headless Chromium as in Node', () => {
    expect(inNode[name]).toBeDefined();
    expect(inBrowser[name]).toEqual(inNode[name]);
  });

  it('has them from every kernel of its method and the reference alike', () => {
    expect(new Set(Object.values(inBrowser[name]!)).size).toBe(1);
  });
});
