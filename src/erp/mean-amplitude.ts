import { samplesInWindow, type TimeWindow } from './time-axis.ts'

/** Mean of the samples whose time lies in the closed window, in µV. Throws as `samplesInWindow`. */
export function meanAmplitude(y: Float64Array, timesMs: Float64Array, window: TimeWindow): number {
  const { first, last } = samplesInWindow(timesMs, window, 'score window')
  let sum = 0
  for (let i = first; i <= last; i++) sum += y[i]
  return sum / (last - first + 1)
}

/** The mean's weights: 1/k on its k samples. */
export function meanAmplitudeWeights(timesMs: Float64Array, window: TimeWindow): Float64Array {
  const { first, last } = samplesInWindow(timesMs, window, 'score window')
  const weights = new Float64Array(timesMs.length)
  weights.fill(1 / (last - first + 1), first, last + 1)
  return weights
}
