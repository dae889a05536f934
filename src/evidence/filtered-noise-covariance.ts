import { noiseAutocovariance, type NoiseSpectrum } from '../erp/noise-autocovariance.ts'
import type { NoiseSpec } from '../erp/noise.ts'
import { forwardTransform, inverseTransform, nextPowerOfTwo, realTransform } from '../filter/fourier.ts'
import { type ActingStages, beforeEpochStages } from './acting-stages.ts'
import { spectrumAfter } from './filtered-noise.ts'
import { symmetricProducts } from './row-products.ts'
import { varianceOfWeights } from './variance-of-weights.ts'

/**
 * Covariance of noise that a chain has filtered and that was averaged over N trials, on an epoch: K·T·Kᵀ/N, T the Toeplitz matrix of the
 * noise after the stages that act as continuous and K the stages that act on the epoch.
 */
export interface NoiseCovariance {
  /** T's first row over N, µV². */
  readonly lags: Float64Array
  readonly stages: ActingStages
}

/**
 * @param noise  of single trials, before the chain. Lines of random phase are part of it; those that are locked are no noise.
 * @param n      samples of the epoch.
 * @throws RangeError for a bad noise or number of trials.
 */
export function noiseCovariance(stages: ActingStages, noise: NoiseSpec, trials: number, n: number): NoiseCovariance {
  if (!(trials >= 1) || !Number.isFinite(trials)) throw new RangeError(`trials must be at least 1, was ${trials}`)
  const { samplingRateHz } = stages
  const spectrum: NoiseSpectrum = spectrumAfter(stages.continuous, noise, samplingRateHz)
  const lags = noiseAutocovariance(spectrum, samplingRateHz, n)
  for (const { hz, amplitudeUv } of spectrum.lines) {
    // what lies above the recording's own anti-alias filter is taken as gone
    if (hz >= samplingRateHz / 2) continue
    const turn = (2 * Math.PI * hz) / samplingRateHz
    for (let k = 0; k < n; k++) lags[k] += (amplitudeUv ** 2 / 2) * Math.cos(turn * k)
  }
  for (let k = 0; k < n; k++) lags[k] /= trials
  return { lags, stages }
}

/** wᵀCw. */
export function noiseVariance({ lags, stages }: NoiseCovariance, weights: Float64Array): number {
  return varianceOfWeights(beforeEpochStages(stages, weights), lags)
}

/**
 * Q·C·Qᵀ for a matrix Q of weights.
 *
 * @param weights  Q, rows of n values; null for the identity.
 * @returns  rows × rows values.
 */
export function noiseMatrix(
  { lags, stages }: NoiseCovariance,
  weights: { readonly rows: Float64Array; readonly count: number } | null,
): Float64Array {
  const n = lags.length
  if (weights === null && stages.onEpoch.length === 0) return toeplitz(lags)
  const count = weights?.count ?? n
  const before = new Float64Array(count * n)
  const row = new Float64Array(n)
  for (let k = 0; k < count; k++) {
    if (weights) row.set(weights.rows.subarray(k * n, (k + 1) * n))
    else row.fill(0)[k] = 1
    before.set(beforeEpochStages(stages, row), k * n)
  }
  const middle = toeplitzTimesRows(lags, before, count)
  return symmetricProducts(before, middle, count, n)
}

function toeplitz(lags: Float64Array): Float64Array {
  const n = lags.length
  const matrix = new Float64Array(n * n)
  for (let i = 0; i < n; i++) for (let j = 0; j < n; j++) matrix[i * n + j] = lags[Math.abs(i - j)]
  return matrix
}

/** T times each row, by a circulant of at least twice the size; two rows a transform. */
function toeplitzTimesRows(lags: Float64Array, rows: Float64Array, count: number): Float64Array {
  const n = lags.length
  const size = nextPowerOfTwo(2 * n)
  const circulant = new Float64Array(size)
  for (let k = 0; k < n; k++) {
    circulant[k] = lags[k]
    if (k > 0) circulant[size - k] = lags[k]
  }
  const eigenvalues = realTransform(circulant, size).re
  const out = new Float64Array(count * n)
  const re = new Float64Array(size)
  const im = new Float64Array(size)
  for (let k = 0; k < count; k += 2) {
    re.fill(0).set(rows.subarray(k * n, (k + 1) * n))
    im.fill(0)
    if (k + 1 < count) im.set(rows.subarray((k + 1) * n, (k + 2) * n))
    const spectrum = forwardTransform(re, im)
    for (let b = 0; b < size; b++) {
      const eigenvalue = eigenvalues[b <= size / 2 ? b : size - b]
      spectrum.re[b] *= eigenvalue
      spectrum.im[b] *= eigenvalue
    }
    const product = inverseTransform(spectrum.re, spectrum.im)
    out.set(product.re.subarray(0, n), k * n)
    if (k + 1 < count) out.set(product.im.subarray(0, n), (k + 1) * n)
  }
  return out
}
