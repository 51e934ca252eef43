/** Poisson numbers: by inversion below a mean of 10, by transformed rejection from there; mean above 0, at most 2^50. */
import { leastMeanOfRejection, poissonByRejection } from './poisson-rejection.ts';
import { poissonByInversion } from './poisson-inversion.ts';

/** `uniform` draws from [0, 1) in steps of 2⁻⁵². */
export const poisson = (mean: number, uniform: () => number): number =>
  mean < leastMeanOfRejection ? poissonByInversion(mean, uniform) : poissonByRejection(mean, uniform);
