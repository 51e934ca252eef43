/** Manrope for reports, from the installed font package: Latin alone where that is enough, else with the scripts beside it. */
import { readFile } from 'node:fs/promises';
import { createRequire } from 'node:module';
import path from 'node:path';
import type { FontSet } from '@/formats/pdf/typeface.ts';

const beside = ['latin-ext', 'greek', 'cyrillic', 'vietnamese'];
/** In the Latin file: Latin-1, dashes, quotes, dots and the minus sign. */
const latinAlone = /^[\n\x20-\x7e\xa0-\xff\u2013\u2014\u2018\u2019\u201c\u201d\u2026\u2212]*$/;
const loaded = new Map<string, Promise<Buffer>>();

function load(file: string): Promise<Buffer> {
  const folder = path.dirname(createRequire(import.meta.url).resolve('@fontsource/manrope/package.json'));
  const loading = loaded.get(file) ?? readFile(path.join(folder, 'files', file));
  loaded.set(file, loading);
  return loading;
}

/** Fonts that have the characters of `text`: opening one takes longer than drawing with it. */
export async function reportFonts(text: string): Promise<FontSet> {
  const subsets = ['latin', ...(latinAlone.test(text) ? [] : beside)];
  const read = (weight: number) => Promise.all(subsets.map((name) => load(`manrope-${name}-${weight}-normal.woff`)));
  return { regular: await read(400), bold: await read(700) };
}
