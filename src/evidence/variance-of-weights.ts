import { inverseRealTransform, nextPowerOfTwo, realTransform } from '../filter/fourier.ts'

/**
 * wᵀCw with C[i][j] = covariance[|i − j|]: the variance of a weighted sum of stationary noise on one stretch, by the weights' own
 * autocorrelation (one transform each way).
 *
 * @param covariance as `noiseAutocovariance`, of at least as many lags as there are weights.
 * @throws RangeError for too few lags.
 */
export function varianceOfWeights(weights: Float64Array, covariance: Float64Array): number {
  const n = weights.length
  if (covariance.length < n) throw new RangeError(`covariance must hold at least ${n} lags, had ${covariance.length}`)
  if (n === 0) return 0
  const size = nextPowerOfTwo(2 * n)
  const { re, im } = realTransform(weights, size)
  const power = re.map((value, k) => value * value + im[k] * im[k])
  const products = inverseRealTransform(power, new Float64Array(power.length), size)
  let variance = products[0] * covariance[0]
  for (let k = 1; k < n; k++) variance += 2 * products[k] * covariance[k]
  // rounding may take a variance of 0 just below it
  return Math.max(0, variance)
}
