/**
 * A number as it is printed in a table: its value, its decimals, and whether its separator could be read two ways.
 */

export type FieldKind = 'number' | 'missing' | 'infinite' | 'thousands' | 'text'

/** Filled by `scanNumber`; one is reused for all fields, since a table has millions. */
export interface PrintedNumber {
  /** Value with the separator read as the decimal separator. NaN unless the field is a number. */
  value: number
  /** Digits after the unit place that the print resolves: 2 for '1.25', 6 for '2.5e-5', 0 for '120'. */
  decimals: number
  separator: '' | '.' | ','
  /** The separator could also separate thousands: '1,234' and '1.234', but not '0,123', '1,23' or '1234,567'. */
  ambiguous: boolean
}

export function emptyNumber(): PrintedNumber {
  return { value: Number.NaN, decimals: 0, separator: '', ambiguous: false }
}

const missingWords = new Set([
  '',
  'nan',
  'na',
  'n/a',
  'n.a.',
  '#n/a',
  'null',
  'none',
  'nil',
  'missing',
  '-',
  '--',
  '.',
  '?',
])
const infinite = /^[+-]?(inf|infinity|∞|1\.#inf)$/i
const thousands = /^[+-]?\d{1,3}(?:([ '’,.\u00a0\u2009\u202f])\d{3})(?:\1\d{3})*(?:[.,]\d+)?(?:e[+-]?\d+)?$/i

function wordKind(field: string): FieldKind {
  const lower = field.toLowerCase()
  if (missingWords.has(lower)) return 'missing'
  if (infinite.test(lower)) return 'infinite'
  if (field.length < 60 && thousands.test(field.replaceAll('\u2212', '-'))) return 'thousands'
  return 'text'
}

/**
 * Reads one field. Accepts a sign (also U+2212), digits, one point or comma, and an exponent; nothing else is a number,
 * neither hexadecimal nor a unit behind it.
 * @param out receives the number; left as it is when the field is none.
 */
export function scanNumber(field: string, out: PrintedNumber): FieldKind {
  let s = field
  const n0 = s.length
  if (n0 === 0) return 'missing'
  if (s.charCodeAt(0) <= 32 || s.charCodeAt(n0 - 1) <= 32 || s.charCodeAt(0) === 160 || s.charCodeAt(n0 - 1) === 160) {
    s = s.trim()
  }
  let i = 0
  const n = s.length
  if (n === 0) return 'missing'
  let first = s.charCodeAt(0)
  if (first === 0x2212) {
    s = `-${s.slice(1)}`
    first = 45
  }
  if (first === 43 || first === 45) i = 1
  const leadingZero = s.charCodeAt(i) === 48
  let whole = 0
  let decimals = 0
  let separator = 0
  let exponent = 0
  let hasExponent = false
  for (; i < n; i++) {
    const c = s.charCodeAt(i)
    if (c >= 48 && c <= 57) {
      if (separator) decimals++
      else whole++
    } else if ((c === 46 || c === 44) && !separator) {
      separator = c
    } else if ((c === 101 || c === 69) && whole + decimals > 0) {
      hasExponent = true
      const rest = s.slice(i + 1)
      if (!/^[+-\u2212]?\d+$/.test(rest)) return wordKind(s)
      exponent = Number(rest.replace('\u2212', '-'))
      if (rest.includes('\u2212')) s = s.replace('\u2212', '-')
      break
    } else {
      return wordKind(s)
    }
  }
  if (whole + decimals === 0) return wordKind(s)
  const value = Number(separator === 44 ? s.replace(',', '.') : s)
  if (!Number.isFinite(value)) return 'infinite'
  out.value = value
  out.decimals = Math.max(0, decimals - exponent)
  out.separator = separator === 44 ? ',' : separator === 46 ? '.' : ''
  out.ambiguous = separator !== 0 && decimals === 3 && whole >= 1 && whole <= 3 && !leadingZero && !hasExponent
  return 'number'
}
