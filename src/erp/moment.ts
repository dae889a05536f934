import { LIMIT_TOLERANCE_SAMPLES, stepMs } from './time-axis.ts'

/**
 * The weights of the value at one moment: 1 on its sample, or the two of linear interpolation where the moment lies between
 * samples.
 *
 * @throws RangeError for a moment outside the sample times.
 */
export function momentWeights(timesMs: Float64Array, atMs: number): Float64Array {
  const step = stepMs(timesMs)
  const n = timesMs.length
  const position = (atMs - timesMs[0]) / step
  if (!(position >= -LIMIT_TOLERANCE_SAMPLES && position <= n - 1 + LIMIT_TOLERANCE_SAMPLES)) {
    throw new RangeError(`the moment must lie in the epoch (${timesMs[0]} to ${timesMs[n - 1]} ms), was ${atMs} ms`)
  }
  const weights = new Float64Array(n)
  const nearest = Math.round(position)
  if (Math.abs(position - nearest) <= LIMIT_TOLERANCE_SAMPLES) {
    weights[nearest] = 1
  } else {
    const below = Math.floor(position)
    weights[below + 1] = position - below
    weights[below] = 1 - weights[below + 1]
  }
  return weights
}
