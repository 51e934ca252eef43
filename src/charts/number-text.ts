/** Numbers as the pages and figures write them: grouped, with as many digits as their error deserves. */

const minus = (text: string): string => text.replace(/^-/, '−');

/** Up to `digits` significant digits, grouped in threes; very large and very small numbers in powers of ten. */
export function numberText(value: number, digits = 4): string {
  if (Number.isNaN(value)) return '–';
  if (!Number.isFinite(value)) return value > 0 ? '∞' : '−∞';
  const size = Math.abs(value);
  if (size !== 0 && (size >= 1e12 || size < 1e-4)) return minus(value.toExponential(Math.max(0, digits - 1)));
  const decimals = size === 0 ? 0 : Math.max(0, digits - 1 - Math.floor(Math.log10(size)));
  return minus(value.toLocaleString('en-GB', { maximumFractionDigits: Math.min(decimals, 12) }));
}

/** A whole number, grouped. */
export const countText = (value: number): string => minus(Math.round(value).toLocaleString('en-GB'));

/**
 * A value and its standard error: the error to two significant digits, the value to the same decimal place (the usual
 * practice of metrology, GUM 7.2.6).
 */
export function valueWithError(value: number, standardError: number): { value: string; error: string } {
  if (!Number.isFinite(standardError) || standardError <= 0) {
    return { value: numberText(value, 6), error: standardError === 0 ? '0' : '–' };
  }
  const exponent = Math.floor(Math.log10(standardError));
  const decimals = 1 - exponent;
  if (decimals > 9 || decimals < -9) {
    return { value: numberText(value, 6), error: numberText(standardError, 2) };
  }
  const fixed = (number: number): string => {
    if (decimals < 0) return countText(Math.round(number / 10 ** -decimals) * 10 ** -decimals);
    return minus(number.toLocaleString('en-GB', { minimumFractionDigits: decimals, maximumFractionDigits: decimals }));
  };
  return { value: fixed(value), error: fixed(standardError) };
}
