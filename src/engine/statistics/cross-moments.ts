/**
 * Covariance and correlation with their standard errors from exact sums.
 *
 * Covariance with n − 1; its variance as that of the mean of the n products of deviations, (μ₂₂ − μ₁₁²) / n. Correlation by the
 * delta method: r²/n · (μ₂₂/μ₁₁² + (μ₄₀/μ₂₀² + μ₀₄/μ₀₂² + 2 μ₂₂/(μ₂₀ μ₀₂))/4 − μ₃₁/(μ₁₁ μ₂₀) − μ₁₃/(μ₁₁ μ₀₂)), multiplied out so that
 * it stands where μ₁₁ is 0. All with the sample's own central moments.
 * Source: Cramér, "Mathematical Methods of Statistics" (1946), sections 27.4 to 27.8.
 */
import { crossPowers, type CrossSums } from './cross-cells.ts';
import { ratio } from './moments.ts';
import type { PowerSums } from './power-sums.ts';

export interface CrossMoments {
  /** NaN below two replicates, as are the errors. */
  covariance: number;
  covarianceStandardError: number;
  /** NaN where one of the two does not vary. */
  correlation: number;
  correlationStandardError: number;
}

/** `x` and `y`: the sums of powers of each of n values; `cross`: of their products. */
export function crossMomentsOf(n: number, x: PowerSums, y: PowerSums, cross: CrossSums): CrossMoments {
  if (n < 2)
    return {
      covariance: NaN,
      covarianceStandardError: NaN,
      correlation: NaN,
      correlationStandardError: NaN,
    };
  const count = BigInt(n);
  const raw = (i: number, j: number): bigint => {
    if (i === 0) return j === 0 ? count : y[j - 1]!;
    if (j === 0) return x[i - 1]!;
    return cross[crossPowers.findIndex(([a, b]) => a === i && b === j)]!;
  };
  /** n^(i + j) times n times the central moment of orders i and j, exact. */
  const scaled = (i: number, j: number): bigint => {
    let sum = 0n;
    for (let a = 0; a <= i; a++)
      for (let b = 0; b <= j; b++) {
        const term = choose(i, a) * choose(j, b) * (-x[0]) ** BigInt(i - a) * (-y[0]) ** BigInt(j - b);
        sum += term * raw(a, b) * count ** BigInt(a + b);
      }
    return sum;
  };
  const central = (i: number, j: number): number => ratio(scaled(i, j), count ** BigInt(i + j + 1));
  const [m11, m20, m02, m22] = [central(1, 1), central(2, 0), central(0, 2), central(2, 2)];
  // n⁵ μ₂₂ and n³ μ₁₁ are whole; the difference is taken before it is rounded.
  const ofProducts = ratio(scaled(2, 2) * count - scaled(1, 1) ** 2n, count ** 6n);
  const moments = {
    covariance: ratio(scaled(1, 1), count ** 2n * (count - 1n)),
    covarianceStandardError: Math.sqrt(Math.max(0, ofProducts) / n),
  };
  if (m20 === 0 || m02 === 0) return { ...moments, correlation: NaN, correlationStandardError: NaN };
  const spread = Math.sqrt(m20) * Math.sqrt(m02);
  const correlation = Math.max(-1, Math.min(1, m11 / spread));
  const variance =
    m22 / spread ** 2 +
    (correlation ** 2 * (central(4, 0) / m20 ** 2 + central(0, 4) / m02 ** 2 + (2 * m22) / spread ** 2)) / 4 -
    (correlation * (central(3, 1) / m20 + central(1, 3) / m02)) / spread;
  // What rounding leaves of 0 is 0: of straight lines.
  const rounded = variance < 1e-12 ? 0 : variance;
  return { ...moments, correlation, correlationStandardError: Math.sqrt(rounded / n) };
}

const choose = (n: number, k: number): bigint => {
  let ways = 1;
  for (let i = 1; i <= k; i++) ways = (ways * (n - k + i)) / i;
  return BigInt(ways);
};
