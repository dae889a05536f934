import type { Unit } from '../evidence/claims/claim.ts'
import { brief, fixed, signed } from './number.ts'

/** Numbers of claims: enough digits that what is printed stands to the amounts claimed as the number itself does. */

const DECIMALS: Record<Unit, number> = { µV: 2, ms: 1, µV·s: 3, '%': 1, dB: 1 }
/** Beyond it a double has no more to say. */
const MOST_DECIMALS = 12

/**
 * Decimals with which a value, rounded, lies on the same side of every amount as before.
 *
 * @param against  amounts that the value is compared with; where it equals one to twelve significant digits, it is printed as equal.
 */
export function decimalsAgainst(value: number, unit: Unit, against: readonly number[]): number {
  let decimals = Math.abs(value) >= 100 && unit !== 'µV·s' ? Math.min(1, DECIMALS[unit]) : DECIMALS[unit]
  while (decimals < MOST_DECIMALS && !against.every((amount) => sameSide(value, amount, decimals))) decimals++
  return decimals
}

function sameSide(value: number, amount: number, decimals: number): boolean {
  if (sameNumber(value, amount)) return true
  const rounded = Number(value.toFixed(decimals))
  return Math.sign(rounded - amount) === Math.sign(value - amount)
}

/** Equal in all the digits that are ever printed. */
export function sameNumber(a: number, b: number): boolean {
  return a === b || Math.abs(a - b) <= 1e-12 * Math.max(Math.abs(a), Math.abs(b))
}

/** "0.52 µV", "−12 %"; a number without limit is said in words by whoever asks. */
export function valueWithUnit(value: number, unit: Unit, against: readonly number[] = []): string {
  return `${fixed(value, decimalsAgainst(value, unit, against))} ${unit}`
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
