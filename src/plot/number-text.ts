/** U+2212, the minus sign as wide as a digit; a hyphen is too short in a column of numbers. */
export const MINUS = '\u2212'

/**
 * A number as text with a true minus sign and no grouping.
 *
 * @param value     any number; NaN gives an en dash, infinities ∞.
 * @param decimals  digits after the point, 0..12; without it the shortest text that is right to 12 digits.
 * @example numberText(-0.25) // '−0.25'
 * @example numberText(3, 1)  // '3.0'
 */
export function numberText(value: number, decimals?: number): string {
  if (Number.isNaN(value)) return '–'
  if (!Number.isFinite(value)) return value < 0 ? `${MINUS}∞` : '∞'
  const text = decimals === undefined ? String(Number(value.toPrecision(12))) : value.toFixed(decimals)
  // "−0.00" claims a sign that the shown digits do not bear out
  const signed = Number(text) === 0 ? text.replace('-', '') : text
  return signed.replaceAll('-', MINUS)
}
