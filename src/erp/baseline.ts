import { checkValues, samplesInWindow, type TimeWindow } from './time-axis.ts'

/** The stretch whose mean is subtracted, or 'none'. */
export type Baseline = TimeWindow | 'none'

/**
 * y minus its mean over the baseline window; with 'none' a copy of y.
 *
 * @param y       µV, one value per time.
 * @param timesMs evenly spaced sample times.
 * @param out     takes the result, as long as y; may be y itself. A sweep over thousands of epochs spares an array for each.
 * @throws RangeError for values that are not finite, a window that leaves the epoch or holds no sample, or an `out` of another length.
 */
export function correctBaseline(
  y: Float64Array,
  timesMs: Float64Array,
  baseline: Baseline,
  out: Float64Array = new Float64Array(y.length),
): Float64Array {
  checkValues(y, timesMs)
  if (out.length !== y.length) throw new RangeError(`out must hold ${y.length} values, had ${out.length}`)
  const corrected = out
  if (out !== y) out.set(y)
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
