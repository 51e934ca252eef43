/**
 * The score interval of a probability from a count of successes.
 * Source: Wilson, "Probable inference, the law of succession, and statistical inference" (J. Am. Stat. Assoc. 1927).
 */

/** The two-sided 95 % point of the normal distribution. */
export const normal95 = 1.959963984540054;

/** Interval of the probability after `successes` of `trials`, at the normal quantile `z`. */
export function wilsonInterval(successes: number, trials: number, z = normal95): { lower: number; upper: number } {
  if (!(trials > 0)) return { lower: 0, upper: 1 };
  const share = successes / trials;
  const z2 = z * z;
  const centre = share + z2 / (2 * trials);
  const margin = z * Math.sqrt((share * (1 - share)) / trials + z2 / (4 * trials * trials));
  const scale = 1 + z2 / trials;
  return {
    lower: successes === 0 ? 0 : Math.max(0, (centre - margin) / scale),
    upper: successes === trials ? 1 : Math.min(1, (centre + margin) / scale),
  };
}
