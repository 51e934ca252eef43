/** Manrope for documents, from the installed font package: Latin first, then the scripts it has beside. */
import { readFile } from 'node:fs/promises';
import path from 'node:path';
import type { FontSet } from '@/formats/pdf/typeface.ts';
import { projectRoot } from '../project-root.ts';

const subsets = ['latin', 'latin-ext', 'greek', 'cyrillic', 'vietnamese'];
let loading: Promise<FontSet> | undefined;

async function load(): Promise<FontSet> {
  const read = (weight: number) =>
    Promise.all(
      subsets.map((subset) =>
        readFile(
          path.join(projectRoot, `node_modules/@fontsource/manrope/files/manrope-${subset}-${weight}-normal.woff`),
        ),
      ),
    );
  const [regular, bold] = await Promise.all([read(400), read(700)]);
  return { regular, bold };
}

export const invoiceFonts = (): Promise<FontSet> => (loading ??= load());
