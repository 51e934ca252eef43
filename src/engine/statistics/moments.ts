/**
 * Mean, standard deviation and their standard errors from exact sums, rounded once at the end.
 *
 * SE of the mean: s / √n. Variance of s²: (μ₄ − σ⁴ (n − 3)/(n − 1)) / n with the sample's own μ₄ and s² in place of μ₄ and σ²,
 * and SE(s) = SE(s²) / 2s (delta method). Cov(mean, s²) = μ₃ / n, which with the two variances gives the errors of the Fano
 * factor s² / mean and of the coefficient of variation s / mean by the same method.
 * Source: Cramér, "Mathematical Methods of Statistics" (1946), ch. 27.
 */
import type { PowerSums } from './power-sums.ts';

export interface Moments {
  mean: number;
  /** With n − 1; NaN below two replicates, as are the standard errors. */
  sd: number;
  meanStandardError: number;
  sdStandardError: number;
  /** Variance / mean; NaN where the mean is 0. */
  fano: number;
  fanoStandardError: number;
  /** Coefficient of variation, sd / mean; NaN where the mean is 0. */
  cv: number;
  cvStandardError: number;
}

const bitLength = (x: bigint): number => (x === 0n ? 0 : x.toString(16).length * 4);

/** numerator / denominator · 2^-scale as the double nearest to it (to 2^-60 relative before rounding). */
export function ratio(numerator: bigint, denominator: bigint, scale = 0): number {
  if (numerator === 0n) return 0;
  const negative = numerator < 0n;
  const magnitude = negative ? -numerator : numerator;
  const shift = bitLength(denominator) - bitLength(magnitude) + 72;
  const quotient =
    shift >= 0 ? (magnitude << BigInt(shift)) / denominator : magnitude / (denominator << BigInt(-shift));
  const power = -shift - scale;
  const half = Math.trunc(power / 2);
  const value = Number(quotient) * 2 ** half * 2 ** (power - half);
  return negative ? -value : value;
}

/** Sums of x, x², x³, x⁴ of n values; each sum is in units of 2^-scale. */
export function momentsOf(n: number, sums: PowerSums, scale = 0n): Moments {
  const count = BigInt(n);
  // In units of 2^-scale for x itself, so that all four are sums of powers of whole numbers.
  const [s1, s2, s3, s4] = [sums[0], sums[1] << scale, sums[2] << (2n * scale), sums[3] << (3n * scale)] as PowerSums;
  const unit = Number(scale);
  if (n < 1) return { mean: NaN, ...noSpread };
  const mean = ratio(s1, count, unit);
  if (n < 2) return { mean, ...noSpread };
  /** n² times the second and n⁴ times the fourth central moment. */
  const second = count * s2 - s1 * s1;
  const fourth = count ** 3n * s4 - 4n * count * count * s1 * s3 + 6n * count * s1 * s1 * s2 - 3n * s1 ** 4n;
  const variance = ratio(second, count * (count - 1n), 2 * unit);
  const sd = Math.sqrt(variance);
  // μ₄ − s⁴ (n − 3)/(n − 1), over the common denominator n⁴ (n − 1)³; s² = second / (n (n − 1)).
  const numerator = fourth * (count - 1n) ** 3n - second * second * count * count * (count - 3n);
  const varianceOfVariance = ratio(numerator, count ** 5n * (count - 1n) ** 3n, 4 * unit);
  const sdStandardError = second === 0n ? 0 : Math.sqrt(Math.max(0, varianceOfVariance)) / (2 * sd);
  const third = count * count * s3 - 3n * count * s1 * s2 + 2n * s1 ** 3n;
  const covariance = ratio(third, count ** 4n, 3 * unit);
  const noise = noiseOf({ n, mean, variance, varianceOfVariance: Math.max(0, varianceOfVariance), covariance });
  return { mean, sd, meanStandardError: sd / Math.sqrt(n), sdStandardError, ...noise };
}

const noSpread = {
  sd: NaN,
  meanStandardError: NaN,
  sdStandardError: NaN,
  fano: NaN,
  fanoStandardError: NaN,
  cv: NaN,
  cvStandardError: NaN,
};

/** Fano factor and coefficient of variation with their errors by the delta method; `covariance` is that of mean and s². */
function noiseOf(moments: {
  n: number;
  mean: number;
  variance: number;
  varianceOfVariance: number;
  covariance: number;
}): Pick<Moments, 'fano' | 'fanoStandardError' | 'cv' | 'cvStandardError'> {
  const { n, mean, variance, varianceOfVariance, covariance } = moments;
  if (mean === 0) return { fano: NaN, fanoStandardError: NaN, cv: NaN, cvStandardError: NaN };
  const fano = variance / mean;
  const cv = Math.sqrt(variance) / mean;
  if (variance === 0) return { fano, fanoStandardError: 0, cv, cvStandardError: 0 };
  const ofVariance = varianceOfVariance / variance ** 2;
  const ofMean = variance / n / mean ** 2;
  const joint = covariance / (mean * variance);
  return {
    fano,
    fanoStandardError: Math.abs(fano) * Math.sqrt(Math.max(0, ofVariance + ofMean - 2 * joint)),
    cv,
    cvStandardError: Math.abs(cv) * Math.sqrt(Math.max(0, ofVariance / 4 + ofMean - joint)),
  };
}
