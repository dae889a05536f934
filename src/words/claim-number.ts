import type { Unit } from '../evidence/claims/claim.ts'
import { brief, fixed, signed } from './number.ts'

/** Numbers of claims: enough digits that what is printed stands to the amounts claimed as the number itself does. */

const DECIMALS: Record<Unit, number> = { µV: 2, ms: 1, µV·s: 3, '%': 1, dB: 1 }
/** Beyond it a double has no more to say. */
const MOST_DECIMALS = 12
/** A number that is zero to so many decimals is zero to a reader. */
const ZERO_DECIMALS = 6

/**
 * Decimals with which a value, rounded, lies on the same side of every amount as before.
 *
 * @param against  amounts that the value is compared with; where it equals one to nine significant digits, or is zero to
 *   six decimals, it is printed as it.
 */
export function decimalsAgainst(value: number, unit: Unit, against: readonly number[]): number {
  const usual = Math.abs(value) >= 100 && unit !== 'µV·s' ? 1 : DECIMALS[unit]
  let decimals = usual
  for (const amount of against) {
    const most = amount === 0 ? ZERO_DECIMALS : MOST_DECIMALS
    let needed = usual
    while (needed <= most && !sameSide(value, amount, needed)) needed++
    if (needed <= most) decimals = Math.max(decimals, needed)
  }
  return decimals
}

function sameSide(value: number, amount: number, decimals: number): boolean {
  const rounded = Number(value.toFixed(decimals))
  if (sameNumber(value, amount)) return sameNumber(rounded, amount)
  return Math.sign(rounded - amount) === Math.sign(value - amount)
}

/** Equal but for rounding, as the claims themselves take it. */
export function sameNumber(a: number, b: number): boolean {
  if (a === b) return true
  return Number.isFinite(a) && Number.isFinite(b) && Math.abs(a - b) <= 1e-9 * Math.max(Math.abs(a), Math.abs(b))
}

/** "0.52 µV", "−12 %"; a number without limit is said in words by whoever asks. */
export function valueWithUnit(value: number, unit: Unit, against: readonly number[] = []): string {
  return `${fixed(value, decimalsAgainst(value, unit, against))} ${unit}`
}

/** What is left of a tone is small: two significant digits at least. */
export function toneWithUnit(value: number, unit: Unit, against: readonly number[] = []): string {
  const digits = value > 1e-6 ? 1 - Math.floor(Math.log10(value)) : 0
  return `${fixed(value, Math.max(digits, decimalsAgainst(value, unit, against)))} ${unit}`
}

/** With its sign: "+0.52 µV". */
export function changeWithUnit(value: number, unit: Unit, against: readonly number[] = []): string {
  return `${signed(value, decimalsAgainst(value, unit, against))} ${unit}`
}

/** "−1.40 to −0.98 µV", both limits on their own sides of the amounts. */
export function intervalWithUnit(
  [low, high]: readonly [number, number],
  unit: Unit,
  against: readonly number[] = [],
): string {
  const decimals = Math.max(decimalsAgainst(low, unit, against), decimalsAgainst(high, unit, against))
  return `${fixed(low, decimals)} to ${fixed(high, decimals)} ${unit}`
}

/** Trials as a person estimates them: two significant digits, never fewer than were computed. */
export function aboutTrials(trials: number): string {
  const unit = 10 ** Math.max(0, Math.floor(Math.log10(Math.max(1, trials))) - 1)
  return brief(Math.ceil(trials / unit - 1e-9) * unit, 2)
}
