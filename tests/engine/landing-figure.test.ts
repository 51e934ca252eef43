/** The front page shows what the engine computes: recomputing its figure gives the stored numbers, digit for digit. */
import { expect, it } from 'vitest';
import { wardOutbreak } from '@db/seeds/demo-models.ts';
import { computeWardFigure } from '@/components/landing/compute-ward-figure.ts';
import stored from '@/components/landing/ward-figure.json';

it('the figure of the front page is the engine’s own', async () => {
  expect(await computeWardFigure(wardOutbreak.network)).toEqual(stored);
});

/**
 * Branching-process limit of small outbreaks (Whittle 1955, Biometrika 42:116, from memory): with basic reproduction number R and two
 * infectious people to begin with, about (1/R)² of outbreaks stay small. Here R = 0.42 · (26/28) / 0.19. The limit counts outbreaks of
 * any small size in a large population, so only the size is compared: within 0.06 for a ward of 28.
 */
it('the share of small outbreaks lies near the branching-process limit', () => {
  const reproduction = (0.42 * (26 / 28)) / 0.19;
  expect(Math.abs(stored.smallOutbreaks / stored.replicates - reproduction ** -2)).toBeLessThan(0.06);
});
