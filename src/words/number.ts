/**
 * Numbers as the page prints them: a true minus sign (U+2212), no exponent, no grouping. The unit is written by the caller.
 */

const MINUS = '\u2212'

/** Digits of a size ≥ 0 that never turn into an exponent: from 1e21 on, where `toFixed` would use one, every double is whole. */
function digitsOf(size: number, decimals: number): string {
  return size < 1e21 ? size.toFixed(decimals) : BigInt(size).toString()
}

/** A number with a fixed count of decimals; a rounded zero carries no sign. */
export function fixed(value: number, decimals: number): string {
  if (!Number.isFinite(value)) return '\u2013'
  const text = digitsOf(Math.abs(value), decimals)
  return value < 0 && Number(text) !== 0 ? MINUS + text : text
}

/** A change: like `fixed`, with a plus sign before what is positive after rounding. */
export function signed(value: number, decimals: number): string {
  const text = fixed(value, decimals)
  return value > 0 && Number(text) !== 0 ? `+${text}` : text
}

/** A number with at most `digits` significant digits and no trailing zeros: 0.016, 29.1, 1, 500. */
export function brief(value: number, digits = 3): string {
  if (!Number.isFinite(value)) return '\u2013'
  if (value === 0) return '0'
  const size = Math.min(Number.MAX_VALUE, Math.abs(Number(value.toPrecision(digits))))
  const decimals = Math.max(0, Math.min(100, digits - 1 - Math.floor(Math.log10(size))))
  const text = digitsOf(size, decimals)
  const trimmed = text.includes('.') ? text.replace(/\.?0+$/, '') : text
  return value < 0 && Number(trimmed) !== 0 ? MINUS + trimmed : trimmed
}

/** A measured number with exactly so many significant digits, zeros at the end among them: 0.20, 1.0, 29; whole where it has more. */
export function measured(value: number, digits: number): string {
  if (!Number.isFinite(value)) return '\u2013'
  if (value === 0) return '0'
  const size = Math.abs(Number(value.toPrecision(digits)))
  return fixed(value, Math.max(0, Math.min(100, digits - 1 - Math.floor(Math.log10(size)))))
}

/** A number as the user typed it: every digit that matters, up to twelve. */
export function exact(value: number): string {
  return brief(value, 12)
}

/** What a person types for a number: a true or a plain minus, a decimal point or comma. NaN for anything else, and for what no double can hold. */
export function parseNumber(text: string): number {
  const plain = text.trim().replaceAll(MINUS, '-').replace(',', '.')
  if (!/^[+-]?(\d+\.?\d*|\.\d+)(e[+-]?\d+)?$/i.test(plain)) return Number.NaN
  const value = Number(plain)
  return Number.isFinite(value) ? value : Number.NaN
}

/** "a, b and c" */
export function list(items: readonly string[]): string {
  if (items.length < 2) return items.join('')
  return `${items.slice(0, -1).join(', ')} and ${items[items.length - 1]}`
}
