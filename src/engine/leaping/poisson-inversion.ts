/**
 * Poisson numbers of small mean by inversion: the least k whose cumulative probability is above a uniform, found by adding up
 * probabilities from 0. One uniform, k + 1 additions.
 *
 * Source: Devroye, Non-Uniform Random Variate Generation (1986), ch. X.3 (citation from memory). Exact but for the uniform's steps of
 * 2⁻⁵²: what lies in the tail beyond the last sum that still grows is not reached.
 */
import { exponential } from '../kernel/elementary/exponential.ts';

export function poissonByInversion(mean: number, uniform: () => number): number {
  const drawn = uniform();
  let firings = 0;
  let probability = exponential(-mean);
  let cumulative = probability;
  while (drawn >= cumulative) {
    firings += 1;
    probability = (probability * mean) / firings;
    const next = cumulative + probability;
    if (next === cumulative) break;
    cumulative = next;
  }
  return firings;
}
