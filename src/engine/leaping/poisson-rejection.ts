/**
 * Poisson numbers of mean 10 and more by transformed rejection with squeeze (PTRS): about 1.1 to 1.2 tries of two uniforms each,
 * whatever the mean.
 *
 * Source: Hörmann, "The transformed rejection method for generating Poisson random variables" (Insurance: Mathematics and
 * Economics 12:39–45, 1993; constants from memory, checked by goodness of fit). The acceptance test compares with ln P(k), here not
 * as k ln μ − μ − ln k!, which loses its digits to cancellation where μ is large, but by Loader's saddle-point form
 * (poisson-probability.ts).
 */
import { logarithm } from '../kernel/elementary/logarithm.ts';
import { logPoissonProbability } from './poisson-probability.ts';

/** PTRS is valid from this mean up. */
export const leastMeanOfRejection = 10;

export function poissonByRejection(mean: number, uniform: () => number): number {
  const b = 0.931 + 2.53 * Math.sqrt(mean);
  const a = -0.059 + 0.02483 * b;
  const squeeze = 0.9277 - 3.6224 / (b - 2);
  const inverseAlpha = 1.1239 + 1.1328 / (b - 3.4);
  for (;;) {
    const u = uniform() - 0.5;
    const v = uniform();
    const distance = 0.5 - Math.abs(u);
    const firings = Math.floor(((2 * a) / distance + b) * u + mean + 0.43);
    if (distance >= 0.07 && v <= squeeze) return firings;
    if (firings < 0 || (distance < 0.013 && v > distance)) continue;
    const height = logarithm((v * inverseAlpha) / (a / (distance * distance) + b));
    if (height <= logPoissonProbability(firings, mean)) return firings;
  }
}
