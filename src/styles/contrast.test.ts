/** The colours of global.css against the contrast formula and thresholds of WCAG 2.2 (1.4.3 text 4.5:1, 1.4.11 controls 3:1). */
import { readFile } from 'node:fs/promises';
import path from 'node:path';
import { describe, expect, it } from 'vitest';
import { projectRoot } from '@/server/project-root.ts';

type Colours = Record<string, [number, number, number]>;
const css = await readFile(path.join(projectRoot, 'src/styles/global.css'), 'utf8');

function coloursOf(block: string): Colours {
  const found = [...block.matchAll(/--([\w-]+): (\d+) (\d+) (\d+);/g)];
  return Object.fromEntries(found.map(([, name, r, g, b]) => [name, [Number(r), Number(g), Number(b)]]));
}
const [light, dark] = [...css.matchAll(/color-scheme: (?:light|dark);\n[^}]*/g)].map(([block]) => coloursOf(block));
const themes: [string, Colours][] = [
  ['light', light!],
  ['dark', dark!],
];

/** Relative luminance, WCAG 2.2 (from memory; the sRGB threshold as corrected in 2021 makes no difference here). */
function luminance([red, green, blue]: [number, number, number]): number {
  const linear = (channel: number): number => {
    const share = channel / 255;
    return share <= 0.04045 ? share / 12.92 : ((share + 0.055) / 1.055) ** 2.4;
  };
  return 0.2126 * linear(red) + 0.7152 * linear(green) + 0.0722 * linear(blue);
}
function contrast(colours: Colours, one: string, other: string): number {
  const [high, low] = [luminance(colours[one]!), luminance(colours[other]!)].sort((a, b) => b - a);
  return (high! + 0.05) / (low! + 0.05);
}

describe('the contrast formula', () => {
  it('gives 21:1 for black on white, as WCAG defines the end of its scale', () => {
    expect(contrast({ black: [0, 0, 0], white: [255, 255, 255] }, 'black', 'white')).toBeCloseTo(21, 10);
  });
});

describe.each(themes)('colours of the %s theme', (_, colours) => {
  it.each(['ink', 'soft', 'phenol', 'bromo', 'malachite', 'methyl', 'congo'])(
    '%s is legible as text on paper and panel',
    (token) => {
      for (const ground of ['paper', 'panel']) expect(contrast(colours, token, ground)).toBeGreaterThanOrEqual(4.5);
    },
  );
  it('ink and soft are legible on glass and on the liquid', () => {
    for (const ground of ['glass', 'liquid']) {
      expect(contrast(colours, 'ink', ground)).toBeGreaterThanOrEqual(4.5);
    }
    expect(contrast(colours, 'soft', 'glass')).toBeGreaterThanOrEqual(4.5);
  });
  it('text on phenol is legible', () => {
    expect(contrast(colours, 'on-phenol', 'phenol')).toBeGreaterThanOrEqual(4.5);
  });
  it('outlines of controls stand out from paper and panel', () => {
    for (const ground of ['paper', 'panel']) expect(contrast(colours, 'edge', ground)).toBeGreaterThanOrEqual(3);
  });
  it('the meniscus stands out from the liquid it crosses', () => {
    expect(contrast(colours, 'phenol', 'liquid')).toBeGreaterThanOrEqual(3);
  });
});
