import { checkChoice, checkCutoffs, said, specError } from './spec-error.ts'
import type { WindowedSincSpec } from './stage.ts'
import { checkTaps } from './tap-limit.ts'
import { checkWindow, halfWindow, tapsForTransition } from './window.ts'

/**
 * @throws RangeError for a pass, cutoff, meaning, transition, window or delay that cannot be designed, among them a
 *         transition that reaches 0 Hz or half the sampling rate (Widmann, Schröger & Maess 2015, from memory).
 */
export function checkWindowedSinc(spec: WindowedSincSpec, samplingRateHz: number): void {
  checkChoice('pass', spec.pass, ['low', 'high', 'band', 'stop'])
  checkChoice('meaning', spec.meaning, ['half-amplitude', 'half-power', 'design'])
  checkChoice('delay', spec.delay, ['compensated', 'causal', 'minimum-phase'])
  checkWindow(spec.window)
  checkCutoffs(spec.pass, spec.cutoffsHz, samplingRateHz)
  if (!(typeof spec.transitionHz === 'number' && spec.transitionHz > 0 && spec.transitionHz < Infinity)) {
    throw specError('transitionHz', `transitionHz must be a positive number, was ${said(spec.transitionHz)}`)
  }
  // half-amplitude points lie at the centres; where half-power points are stated, only the solved centres count
  if (spec.meaning !== 'half-power') checkTransition(spec.cutoffsHz, spec.transitionHz, samplingRateHz)
  checkTaps('transitionHz', tapsForTransition(spec.window, spec.transitionHz, samplingRateHz))
}

function checkTransition(centresHz: readonly number[], transitionHz: number, samplingRateHz: number): void {
  const half = samplingRateHz / 2
  for (const centre of centresHz) {
    const from = centre - transitionHz / 2
    const to = centre + transitionHz / 2
    if (from > 0 && to < half) continue
    const limit = from > 0 ? `below ${half} Hz (half the sampling rate)` : 'above 0 Hz'
    throw specError(
      'transitionHz',
      `transitionHz must keep the transition ${limit}: ${transitionHz} about its centre at ${short(centre)} Hz ` +
        `reaches from ${short(from)} to ${short(to)} Hz`,
    )
  }
}

function short(x: number): number {
  return Number(x.toPrecision(6))
}

/**
 * Symmetric kernel of a windowed sinc, an odd number of taps by the window's rule. All passes come from low-passes that
 * are 1 at 0 Hz: high-pass δ − low, band-pass low(f2) − low(f1), band-stop δ − band-pass; so a high-pass and a band-pass
 * are 0 at 0 Hz.
 *
 * @param spec  a checked windowed sinc; its delay plays no part here.
 * @throws RangeError where no nominal cutoffs give the stated half-amplitude or half-power points.
 */
export function windowedSincTaps(spec: WindowedSincSpec, samplingRateHz: number): Float64Array {
  const taps = tapsForTransition(spec.window, spec.transitionHz, samplingRateHz)
  const window = halfWindow(spec.window, taps)
  const nominal = solveNominal(spec, samplingRateHz, window)
  const half = lowPassHalf(nominal[0], samplingRateHz, window)
  if (nominal.length === 2) {
    const upper = lowPassHalf(nominal[1], samplingRateHz, window)
    for (let k = 0; k < half.length; k++) half[k] = upper[k] - half[k]
  }
  if (spec.pass === 'high' || spec.pass === 'stop') {
    for (let k = 0; k < half.length; k++) half[k] = -half[k]
    half[0] += 1
  }
  const middle = half.length - 1
  const kernel = new Float64Array(taps)
  for (let k = 0; k <= middle; k++) {
    kernel[middle + k] = half[k]
    kernel[middle - k] = half[k]
  }
  return kernel
}

/**
 * Nominal cutoffs in Hz (centres of the ideal transitions) at which the stage has the stated half-amplitude or half-power
 * points; the stated cutoffs themselves where they are meant as design cutoffs.
 *
 * @throws RangeError where there are none.
 */
export function nominalCutoffsHz(spec: WindowedSincSpec, samplingRateHz: number): number[] {
  if (spec.meaning === 'design') return [...spec.cutoffsHz]
  const taps = tapsForTransition(spec.window, spec.transitionHz, samplingRateHz)
  return solveNominal(spec, samplingRateHz, halfWindow(spec.window, taps))
}

/** Middle and right half of a low-pass kernel scaled to 1 at 0 Hz. */
function lowPassHalf(cutoffHz: number, samplingRateHz: number, window: Float64Array): Float64Array {
  const ratio = (2 * cutoffHz) / samplingRateHz
  const half = new Float64Array(window.length)
  half[0] = ratio * window[0]
  let tail = 0
  for (let k = window.length - 1; k > 0; k--) {
    half[k] = (window[k] * Math.sin(Math.PI * ratio * k)) / (Math.PI * k)
    tail += half[k]
  }
  const scale = 1 / (half[0] + 2 * tail)
  for (let k = 0; k < half.length; k++) half[k] *= scale
  return half
}

/** Gains of one low-pass at some frequencies, and their derivatives by its nominal cutoff. */
interface LowPassGains {
  readonly gain: number[]
  readonly slope: number[]
}

/**
 * The gain of the low-pass is a sum of w[k]·sin(2πck/fs)/(πk)·cos(2πfk/fs), whose derivative by the cutoff c has the same
 * terms; Newton's method on it takes a few sums, never a redesign.
 */
function solveNominal(spec: WindowedSincSpec, samplingRateHz: number, window: Float64Array): number[] {
  if (spec.meaning === 'design') return [...spec.cutoffsHz]
  const asked = spec.meaning === 'half-amplitude' ? 0.5 : Math.SQRT1_2
  // a high-pass or band-stop has the gain q where the kernel that it is taken from has 1 − q
  const target = spec.pass === 'low' || spec.pass === 'band' ? asked : 1 - asked
  const half = samplingRateHz / 2
  const cosines = spec.cutoffsHz.map((f) => cosineTable((2 * Math.PI * f) / samplingRateHz, window.length))
  const largestStep = spec.transitionHz / 2

  let cutoffs = [...spec.cutoffsHz]
  for (let round = 0; round < 60; round++) {
    const low = lowPassGains(cutoffs[0], samplingRateHz, window, cosines)
    let steps: number[]
    let error: number
    if (cutoffs.length === 1) {
      const miss = low.gain[0] - target
      error = Math.abs(miss)
      steps = [-miss / low.slope[0]]
    } else {
      const high = lowPassGains(cutoffs[1], samplingRateHz, window, cosines)
      const missLow = high.gain[0] - low.gain[0] - target
      const missHigh = high.gain[1] - low.gain[1] - target
      error = Math.max(Math.abs(missLow), Math.abs(missHigh))
      const determinant = -low.slope[0] * high.slope[1] + high.slope[0] * low.slope[1]
      steps = [
        (-missLow * high.slope[1] + missHigh * high.slope[0]) / determinant,
        (-missLow * low.slope[1] + missHigh * low.slope[0]) / determinant,
      ]
    }
    if (!Number.isFinite(error) || steps.some((step) => !Number.isFinite(step))) break
    const moved = steps.map((step) => Math.max(-largestStep, Math.min(largestStep, step)))
    const next = cutoffs.map((cutoff, i) => {
      const to = cutoff + moved[i]
      return to <= 0 ? cutoff / 2 : to >= half ? (cutoff + half) / 2 : to
    })
    const settled = error < 1e-13 || next.every((cutoff, i) => Math.abs(cutoff - cutoffs[i]) < 1e-14 * cutoff)
    if (settled && error < 1e-9 && (next.length === 1 || next[0] < next[1])) {
      checkTransition(cutoffs, spec.transitionHz, samplingRateHz)
      return cutoffs
    }
    cutoffs = next
  }
  throw specError(
    'transitionHz',
    `transitionHz must be narrow enough for the gain to pass ${spec.meaning} at cutoffsHz ${said(spec.cutoffsHz)}, ` +
      `was ${spec.transitionHz}`,
  )
}

function cosineTable(angle: number, length: number): Float64Array {
  const table = new Float64Array(length)
  for (let k = 0; k < length; k++) table[k] = Math.cos(angle * k)
  return table
}

function lowPassGains(
  cutoffHz: number,
  samplingRateHz: number,
  window: Float64Array,
  cosines: readonly Float64Array[],
): LowPassGains {
  const angle = (2 * Math.PI * cutoffHz) / samplingRateHz
  const first = cosines[0]
  const second = cosines.length > 1 ? cosines[1] : first
  const stepRe = Math.cos(angle)
  const stepIm = Math.sin(angle)
  let re = 1
  let im = 0
  // sums over k > 0 of the terms and of their derivatives, by angle; k = 0 is half a pair
  let sum0 = angle / 2
  let slope0 = 0.5
  let sum1 = sum0
  let slope1 = slope0
  let sum2 = sum0
  let slope2 = slope0
  for (let k = 1; k < window.length; k++) {
    if (k % 64 === 0) {
      // a fresh start now and then keeps the rotation's rounding from growing
      re = Math.cos(angle * k)
      im = Math.sin(angle * k)
    } else {
      const turned = re * stepRe - im * stepIm
      im = re * stepIm + im * stepRe
      re = turned
    }
    const value = (window[k] * im) / k
    const slope = window[k] * re
    sum0 += value
    slope0 += slope
    sum1 += value * first[k]
    slope1 += slope * first[k]
    sum2 += value * second[k]
    slope2 += slope * second[k]
  }
  const perHz = (2 * Math.PI) / samplingRateHz
  const gain = [sum1 / sum0, sum2 / sum0]
  return {
    gain,
    slope: [((slope1 - gain[0] * slope0) / sum0) * perHz, ((slope2 - gain[1] * slope0) / sum0) * perHz],
  }
}
