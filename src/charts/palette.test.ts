import { readFileSync } from 'node:fs';
import { describe, expect, it } from 'vitest';
import { darkTheme, leastSeriesDistance, lightTheme, type ChartTheme } from './palette.ts';

/** sRGB to linear light: IEC 61966-2-1. */
const linear = (hex: string): number[] =>
  [1, 3, 5].map((at) => {
    const channel = parseInt(hex.slice(at, at + 2), 16) / 255;
    return channel <= 0.04045 ? channel / 12.92 : ((channel + 0.055) / 1.055) ** 2.4;
  });

const times = (matrix: number[][], vector: number[]): number[] =>
  matrix.map((row) => row.reduce((sum, weight, index) => sum + weight * vector[index]!, 0));

/** Simulated vision in linear light at full severity: Machado, Oliveira & Fernandes (2009), table of matrices (from memory). */
const visions: Record<string, number[][]> = {
  full: [
    [1, 0, 0],
    [0, 1, 0],
    [0, 0, 1],
  ],
  protanopia: [
    [0.152286, 1.052583, -0.204868],
    [0.114503, 0.786281, 0.099216],
    [-0.003882, -0.048116, 1.051998],
  ],
  deuteranopia: [
    [0.367322, 0.860646, -0.227968],
    [0.280085, 0.672501, 0.047413],
    [-0.01182, 0.04294, 0.968881],
  ],
  tritanopia: [
    [1.255528, -0.076749, -0.178779],
    [-0.078411, 0.930809, 0.147602],
    [0.004733, 0.691367, 0.3039],
  ],
};

/** CIE 1976 L*a*b* under D65: the CIE's published formulas. */
function labOf(hex: string, vision: number[][]): number[] {
  const seen = times(vision, linear(hex)).map((channel) => Math.min(1, Math.max(0, channel)));
  const [x, y, z] = times(
    [
      [0.4124564 / 0.95047, 0.3575761 / 0.95047, 0.1804375 / 0.95047],
      [0.2126729, 0.7151522, 0.072175],
      [0.0193339 / 1.08883, 0.119192 / 1.08883, 0.9503041 / 1.08883],
    ],
    seen,
  ).map((value) => (value > 216 / 24389 ? Math.cbrt(value) : ((24389 / 27) * value + 16) / 116)) as [
    number,
    number,
    number,
  ];
  return [116 * y - 16, 500 * (x - y), 200 * (y - z)];
}

/** WCAG 2.2, relative luminance and contrast ratio. */
function contrast(one: string, other: string): number {
  const [dark, light] = [one, other].map((hex) => labLuminance(hex)).sort((a, b) => a - b) as [number, number];
  return (light + 0.05) / (dark + 0.05);
}
const labLuminance = (hex: string): number => times([[0.2126, 0.7152, 0.0722]], linear(hex))[0]!;

const themes: [string, ChartTheme][] = [
  ['light', lightTheme],
  ['dark', darkTheme],
];

describe.each(themes)('the %s series colours', (_, theme) => {
  it.each(Object.keys(visions))('stay apart in %s vision', (vision) => {
    const labs = theme.series.map((hex) => labOf(hex, visions[vision]!));
    const distances = labs.flatMap((one, index) =>
      labs.slice(0, index).map((other) => Math.hypot(...one.map((value, axis) => value - other[axis]!))),
    );
    expect(Math.min(...distances)).toBeGreaterThanOrEqual(leastSeriesDistance);
  });

  it('reach the contrast of 3 that WCAG 2.2 (1.4.11) asks of graphics, on paper and on panel', () => {
    for (const hex of theme.series) {
      expect(contrast(hex, theme.paper)).toBeGreaterThanOrEqual(3);
      expect(contrast(hex, theme.panel)).toBeGreaterThanOrEqual(3);
    }
  });
});

it('the server-side themes repeat the colours that the pages use', () => {
  const css = readFileSync('src/styles/global.css', 'utf8');
  const hexOf = (triple: string) =>
    `#${triple
      .trim()
      .split(/\s+/)
      .map((part) => Number(part).toString(16).padStart(2, '0'))
      .join('')}`.toUpperCase();
  for (const name of [
    'paper',
    'panel',
    'glass',
    'rule',
    'ink',
    'soft',
    'bromo',
    'methyl',
    'malachite',
    'phenol',
    'congo',
  ] as const) {
    const [light, dark] = [...css.matchAll(new RegExp(`--${name}: ([\\d ]+);`, 'g'))].map((match) => hexOf(match[1]!));
    expect([name, lightTheme[name], darkTheme[name]]).toEqual([name, light, dark]);
  }
});
