/** Manrope for reports, from the installed font package: Latin first, then the scripts it has beside. */
import { readFile } from 'node:fs/promises';
import { createRequire } from 'node:module';
import path from 'node:path';
import type { FontSet } from '@/formats/pdf/typeface.ts';

const subsets = ['latin', 'latin-ext', 'greek', 'cyrillic', 'vietnamese'];
let loading: Promise<FontSet> | undefined;

async function load(): Promise<FontSet> {
  const folder = path.dirname(createRequire(import.meta.url).resolve('@fontsource/manrope/package.json'));
  const read = (weight: number) =>
    Promise.all(subsets.map((subset) => readFile(path.join(folder, `files/manrope-${subset}-${weight}-normal.woff`))));
  const [regular, bold] = await Promise.all([read(400), read(700)]);
  return { regular, bold };
}

export const reportFonts = (): Promise<FontSet> => (loading ??= load());
