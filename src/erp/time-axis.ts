import { allFinite } from '../filter/missing-values.ts'

/**
 * Conventions of this room: times in ms with 0 at the event, amplitudes in µV, areas in µV·s, a waveform is a
 * Float64Array beside a Float64Array of evenly spaced sample times of the same length. Windows are closed intervals, and their
 * limits have a tolerance of 1e-6 sample. Arguments are never changed.
 */

/** A stretch of time, both limits included. */
export interface TimeWindow {
  fromMs: number
  toMs: number
}

/** Tolerance of window limits, in samples: 0.1 + 0.2 must still find the sample at 0.3. */
export const LIMIT_TOLERANCE_SAMPLES = 1e-6

/**
 * The mean step of a time axis, in ms.
 *
 * @throws RangeError for fewer than 2 times, times that are not finite, not ascending, or more than a quarter of a step
 *   off an even spacing (labels rounded to 0.1 ms pass at every sampling rate up to 2500 Hz).
 */
export function stepMs(timesMs: Float64Array): number {
  const n = timesMs.length
  const known = checkedAxes.get(timesMs)
  // one axis serves thousands of scores: it is walked once, and looked at again only where its ends have changed
  if (known && known.first === timesMs[0] && known.last === timesMs[n - 1]) return known.step
  if (n < 2) throw new RangeError(`timesMs must hold at least 2 times, had ${n}`)
  const start = timesMs[0]
  const step = (timesMs[n - 1] - start) / (n - 1)
  if (!(step > 0) || !Number.isFinite(step)) {
    throw new RangeError(`timesMs must ascend, ran from ${start} to ${timesMs[n - 1]}`)
  }
  for (let i = 0; i < n; i++) {
    if (!(Math.abs(timesMs[i] - start - i * step) <= 0.25 * step)) {
      throw new RangeError(`timesMs must be evenly spaced (every ${step} ms), timesMs[${i}] was ${timesMs[i]}`)
    }
  }
  checkedAxes.set(timesMs, { first: start, last: timesMs[n - 1], step })
  return step
}

/** Time axes that were found evenly spaced. An axis is not changed once it is in use. */
const checkedAxes = new WeakMap<Float64Array, { first: number; last: number; step: number }>()

/**
 * First and last index of the samples in a window.
 *
 * @param what names the window in messages, e.g. 'score window'.
 * @throws RangeError when a limit is not a number, the limits are in the wrong order, the window asks for moments that the
 *   axis does not have (a limit may lie less than one step outside: no sample is missing there), or no sample lies in it.
 */
export function samplesInWindow(
  timesMs: Float64Array,
  window: TimeWindow,
  what: string,
): { first: number; last: number } {
  const step = stepMs(timesMs)
  const { fromMs, toMs } = window
  if (!Number.isFinite(fromMs) || !Number.isFinite(toMs)) {
    throw new RangeError(`${what} must have finite limits, was ${fromMs} to ${toMs} ms`)
  }
  if (fromMs > toMs) throw new RangeError(`${what} must begin before it ends, was ${fromMs} to ${toMs} ms`)
  const n = timesMs.length
  const start = timesMs[0]
  const first = Math.ceil((fromMs - start) / step - LIMIT_TOLERANCE_SAMPLES)
  const last = Math.floor((toMs - start) / step + LIMIT_TOLERANCE_SAMPLES)
  if (first < 0 || last > n - 1) {
    throw new RangeError(
      `${what} must lie in the epoch (${round(start)} to ${round(timesMs[n - 1])} ms), was ${fromMs} to ${toMs} ms`,
    )
  }
  if (last < first)
    throw new RangeError(`${what} must hold at least one sample (every ${round(step)} ms), was ${fromMs} to ${toMs} ms`)
  // -0 from Math.ceil would be a strange index to hand out
  return { first: first + 0, last }
}

/** @throws RangeError unless y has one finite value per time. */
export function checkValues(y: Float64Array, timesMs: Float64Array): void {
  if (y.length !== timesMs.length) {
    throw new RangeError(`y must hold one value per time (${timesMs.length}), had ${y.length}`)
  }
  if (allFinite(y)) return
  const i = y.findIndex((value) => !Number.isFinite(value))
  throw new RangeError(`y must hold finite numbers, y[${i}] (at ${round(timesMs[i])} ms) was ${y[i]}`)
}

/** For messages only: 3 decimals at most. */
function round(value: number): number {
  return Math.round(value * 1000) / 1000
}
