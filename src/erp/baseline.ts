import { checkValues, samplesInWindow, type TimeWindow } from './time-axis.ts'

/** The stretch whose mean is subtracted, or 'none'. */
export type Baseline = TimeWindow | 'none'

/**
 * y minus its mean over the baseline window; with 'none' a copy of y.
 *
 * @param y       µV, one value per time.
 * @param timesMs evenly spaced sample times.
 * @throws RangeError for values that are not finite, or a window that leaves the epoch or holds no sample.
 */
export function correctBaseline(y: Float64Array, timesMs: Float64Array, baseline: Baseline): Float64Array {
  checkValues(y, timesMs)
  const corrected = y.slice()
  if (baseline === 'none') return corrected
  const { first, last } = samplesInWindow(timesMs, baseline, 'baseline window')
  // the first sample is taken off before summing, so that a large electrode offset costs no digits
  const offset = y[first]
  let sum = 0
  for (let i = first; i <= last; i++) sum += y[i] - offset
  const mean = offset + sum / (last - first + 1)
  for (let i = 0; i < corrected.length; i++) corrected[i] -= mean
  return corrected
}

/**
 * The weights of the baseline mean: 1/k on the k samples of the window, 0 elsewhere (all 0 with 'none').
 *
 * @throws RangeError for a window that leaves the epoch or holds no sample.
 */
export function baselineWeights(baseline: Baseline, timesMs: Float64Array): Float64Array {
  const weights = new Float64Array(timesMs.length)
  if (baseline === 'none') return weights
  const { first, last } = samplesInWindow(timesMs, baseline, 'baseline window')
  weights.fill(1 / (last - first + 1), first, last + 1)
  return weights
}
