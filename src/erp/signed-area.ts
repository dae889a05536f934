import type { Polarity } from './peak.ts'
import { samplesInWindow, stepMs, type TimeWindow } from './time-axis.ts'

/**
 * Signed area: trapezoids between the window's samples of the waveform clipped at zero on the stated side, in µV·s. Clipping is
 * by sample. A negative side's area is negative; a waveform that never takes that side has area 0.
 *
 * @throws RangeError as `samplesInWindow`, and for a window of fewer than 2 samples.
 */
export function signedArea(y: Float64Array, timesMs: Float64Array, window: TimeWindow, polarity: Polarity): number {
  const running = runningArea(y, timesMs, window, polarity).area
  return running[running.length - 1]
}

/** The area accumulated up to each sample of the window (0 at the first), in µV·s. Throws as `signedArea`. */
export function runningArea(
  y: Float64Array,
  timesMs: Float64Array,
  window: TimeWindow,
  polarity: Polarity,
): { first: number; area: Float64Array } {
  const { first, last } = areaSamples(timesMs, window)
  const halfStepS = stepMs(timesMs) / 2000
  const area = new Float64Array(last - first + 1)
  for (let i = first + 1; i <= last; i++) {
    area[i - first] = area[i - first - 1] + halfStepS * (clip(y[i - 1], polarity) + clip(y[i], polarity))
  }
  return { first, area }
}

/** The trapezoids' weights (s) of the samples that lie on the stated side, held fixed. Throws as `signedArea`. */
export function signedAreaWeights(
  y: Float64Array,
  timesMs: Float64Array,
  window: TimeWindow,
  polarity: Polarity,
): Float64Array {
  const { first, last } = areaSamples(timesMs, window)
  const stepS = stepMs(timesMs) / 1000
  const weights = new Float64Array(timesMs.length)
  for (let i = first; i <= last; i++) {
    if (clip(y[i], polarity) !== 0) weights[i] = i === first || i === last ? stepS / 2 : stepS
  }
  return weights
}

function areaSamples(timesMs: Float64Array, window: TimeWindow): { first: number; last: number } {
  const samples = samplesInWindow(timesMs, window, 'score window')
  if (samples.last === samples.first) {
    throw new RangeError(
      `an area needs at least 2 samples in its window, ${window.fromMs} to ${window.toMs} ms holds 1`,
    )
  }
  return samples
}

function clip(value: number, polarity: Polarity): number {
  return polarity === 'positive' ? Math.max(value, 0) : Math.min(value, 0)
}
