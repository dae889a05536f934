import { checkChoice, said, specError } from './spec-error.ts'
import type { WindowSpec } from './stage.ts'

/**
 * Names of the windows with the constant c of the tap rule taps = c·fs/transition; Kaiser's length has its own formula.
 * Source of the constants: Ifeachor & Jervis, Digital Signal Processing, window table.
 */
const TRANSITION_CONSTANT = { rectangular: 0.9, hann: 3.1, hamming: 3.3, blackman: 5.5 } as const

/** Attenuations in dB for which a Kaiser window is designed: its formulas start at 8, rounding ends the upper ones. */
export const KAISER_DB = { from: 8, to: 200 } as const

/** @throws RangeError for an unknown window or a Kaiser attenuation outside `KAISER_DB`. */
export function checkWindow(window: WindowSpec): void {
  checkChoice('window', window?.name, ['rectangular', 'hann', 'hamming', 'blackman', 'kaiser'])
  if (window.name !== 'kaiser') return
  const db = window.attenuationDb
  if (!(typeof db === 'number' && db >= KAISER_DB.from && db <= KAISER_DB.to)) {
    throw specError(
      'window',
      `attenuationDb must lie between ${KAISER_DB.from} and ${KAISER_DB.to} dB, was ${said(db)}`,
    )
  }
}

/**
 * Kaiser's β for a stop-band attenuation in dB.
 *
 * @see Oppenheim & Schafer, Discrete-Time Signal Processing, ch. 7.
 */
export function kaiserBeta(attenuationDb: number): number {
  if (attenuationDb > 50) return 0.1102 * (attenuationDb - 8.7)
  if (attenuationDb > 21) return 0.5842 * (attenuationDb - 21) ** 0.4 + 0.07886 * (attenuationDb - 21)
  return 0
}

/** Modified Bessel function of the first kind, order 0, by its power series: all terms positive, no cancellation. */
export function besselI0(x: number): number {
  const quarter = (x * x) / 4
  let term = 1
  let sum = 1
  for (let k = 1; term > sum * 1e-17; k++) {
    term *= quarter / (k * k)
    sum += term
  }
  return sum
}

/** Smallest odd whole number ≥ x and ≥ 3; x within rounding of an odd number is that number. */
function oddAtLeast(x: number): number {
  const whole = Math.max(3, Math.ceil(x * (1 - 1e-12)))
  return whole % 2 === 1 ? whole : whole + 1
}

/**
 * Number of taps (odd) that gives a windowed sinc the transition width, by the window's rule.
 *
 * @param transitionHz  width of the transition between pass and stop band in Hz, > 0.
 */
export function tapsForTransition(window: WindowSpec, transitionHz: number, samplingRateHz: number): number {
  if (window.name !== 'kaiser') {
    return oddAtLeast((TRANSITION_CONSTANT[window.name] * samplingRateHz) / transitionHz)
  }
  // Kaiser's length as in SciPy's kaiserord
  const width = (2 * Math.PI * transitionHz) / samplingRateHz
  return oddAtLeast((window.attenuationDb - 7.95) / (2.285 * width) + 1)
}

/**
 * Right half of a symmetric window with an odd number of points, N − 1 in its denominator.
 *
 * @param taps  N, odd.
 * @returns  (N + 1)/2 values from the middle (which is 1) outwards.
 */
export function halfWindow(window: WindowSpec, taps: number): Float64Array {
  const reach = (taps - 1) / 2
  const values = new Float64Array(reach + 1).fill(1)
  if (window.name === 'rectangular' || reach === 0) return values
  if (window.name === 'kaiser') {
    const beta = kaiserBeta(window.attenuationDb)
    const scale = 1 / besselI0(beta)
    for (let k = 0; k <= reach; k++) {
      const x = k / reach
      values[k] = besselI0(beta * Math.sqrt((1 - x) * (1 + x))) * scale
    }
    return values
  }
  for (let k = 0; k <= reach; k++) {
    // sin² and cos² keep the window's small outer values free of cancellation
    const cosine = Math.cos((Math.PI * k) / (2 * reach))
    const square = cosine * cosine
    if (window.name === 'hann') values[k] = square
    else if (window.name === 'hamming') values[k] = 0.08 + 0.92 * square
    // 0.42 + 0.5 cos φ + 0.08 cos 2φ with cos φ = 2c² − 1
    else values[k] = square * (0.36 + 0.64 * square)
  }
  if (window.name !== 'hamming') values[reach] = 0
  return values
}
