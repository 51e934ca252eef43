/** Quantiles of Student's t distribution, for prediction intervals. */

/** Standard normal quantile: Acklam's rational approximation, relative error below 1.2e-9; 0 < p < 1. */
function normalQuantile(p: number): number {
  const a = [
    -39.69683028665376, 220.9460984245205, -275.9285104469687, 138.357751867269, -30.66479806614716, 2.506628277459239,
  ];
  const b = [-54.47609879822406, 161.5858368580409, -155.6989798598866, 66.80131188771972, -13.28068155288572];
  const c = [
    -0.007784894002430293, -0.3223964580411365, -2.400758277161838, -2.549732539343734, 4.374664141464968,
    2.938163982698783,
  ];
  const d = [0.007784695709041462, 0.3224671290700398, 2.445134137142996, 3.754408661907416];
  const polynomial = (coefficients: number[], x: number) => coefficients.reduce((sum, next) => sum * x + next, 0);
  if (p < 0.02425) {
    const q = Math.sqrt(-2 * Math.log(p));
    return polynomial(c, q) / polynomial([...d, 1], q);
  }
  if (p > 1 - 0.02425) return -normalQuantile(1 - p);
  const q = p - 0.5;
  return (polynomial(a, q * q) * q) / polynomial([...b, 1], q * q);
}

/**
 * The p-quantile of Student's law with `degrees` ≥ 1 degrees of freedom. Closed forms for 1 and 2; from 3 the expansion
 * of Abramowitz & Stegun 26.7.5 (from memory), within 0.4 % at p = 0.975 and far closer from 10 degrees on.
 */
export function studentQuantile(p: number, degrees: number): number {
  if (degrees < 1 || !(p > 0 && p < 1))
    throw new Error('Degrees of freedom start at 1, probabilities lie inside 0 … 1.');
  if (degrees === 1) return Math.tan(Math.PI * (p - 0.5));
  if (degrees === 2) return (2 * p - 1) / Math.sqrt(2 * p * (1 - p));
  const x = normalQuantile(p);
  const n = degrees;
  const g1 = (x ** 3 + x) / 4;
  const g2 = (5 * x ** 5 + 16 * x ** 3 + 3 * x) / 96;
  const g3 = (3 * x ** 7 + 19 * x ** 5 + 17 * x ** 3 - 15 * x) / 384;
  const g4 = (79 * x ** 9 + 776 * x ** 7 + 1482 * x ** 5 - 1920 * x ** 3 - 945 * x) / 92_160;
  return x + g1 / n + g2 / n ** 2 + g3 / n ** 3 + g4 / n ** 4;
}
