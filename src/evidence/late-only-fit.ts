import { checkValues } from '../erp/time-axis.ts'
import type { Chain } from '../filter/chain.ts'
import { noiseVariance } from './filtered-noise-covariance.ts'
import { lateActivity } from './late-columns.ts'
import {
  gaussianWeights,
  inCoordinates,
  type LateOnlyModel,
  lateOnlyModel,
  type LateOnlyOptions,
} from './late-only-model.ts'
import {
  type LateOnlyVerdict,
  lateOnlyVerdict,
  NORMAL_95,
  type VerdictConditions,
  verdictConditions,
  type VerdictGrounds,
} from './late-only-verdict.ts'
import { restrictedFit, solveComponents } from './restricted-likelihood.ts'
import { transposeTimes } from './row-products.ts'

export interface LateOnlyFit {
  /** Amplitude of the early component in the unfiltered waveform, µV. */
  readonly beta: number
  readonly standardError: number
  readonly z: number
  /** 95 %, µV. */
  readonly interval: [number, number]
  /** c of the full model, µV. */
  readonly constant: number
  /** s: the noise's covariance over the stated one. */
  readonly noiseScale: number
  /** a: density of the fitted alpha peak in single trials before the chain, at 10 Hz, µV²/Hz. */
  readonly alphaScale: number
  /** Share of y's mean in the early window that the late-only fit makes; 0 where that mean is 0. */
  readonly lateShare: number
  readonly verdict: LateOnlyVerdict
  /** x̂ of the late-only fit (β = 0): unfiltered late activity, from the first sample at which it may be. */
  readonly lateWaveform: { readonly values: Float64Array; readonly fromMs: number }
  /** K·x̂ on y's samples. */
  readonly filtered: Float64Array
  /** c of the late-only fit: y − filtered − lateOnlyConstant is what it leaves. */
  readonly lateOnlyConstant: number
  readonly conditions: VerdictConditions
  readonly grounds: VerdictGrounds
}

/**
 * Could a known chain have made an early deflection from activity that begins only at t0?
 *
 * Model: y = K·x + β·K·e + c + n. K is every enabled stage of `chain`, in the data or not. x is late activity, zero before t0 − slack and else a
 * zero-mean Gaussian process (standard deviation σ, squared-exponential covariance of length ℓ) that goes on after the epoch as far as K
 * reaches. e is a raised cosine on the early window. n has the covariance s·C₀ + a·C_α + r²·I: the stated noise and an alpha peak (10 Hz, SD 2 Hz,
 * 1 µV²/Hz) through the chain, averaged over the trials; s, a ≥ 0 by restricted maximum likelihood; β and c by generalised least squares. The
 * interval is β ± 1.96 standard errors at those s and a.
 *
 * More than 512 samples are fitted by their lowest cosines (see `lowestCosines`).
 *
 * @param y        filtered waveform, µV.
 * @param options  see `LateOnlyOptions`.
 * @throws RangeError for bad numbers, an early window outside the epoch, of which the chain lets nothing through, or an epoch not longer than
 *   a stage's padding.
 * @see Rasmussen & Williams, Gaussian Processes for Machine Learning, 2006, ch. 2.7 (with explicit basis functions); Patterson &
 *   Thompson, Biometrika 58, 545–554, 1971.
 */
export function lateOnlyFit(y: Float64Array, chain: Chain, options: LateOnlyOptions): LateOnlyFit {
  checkValues(y, options.timesMs)
  return fitLateOnly(lateOnlyModel(chain, options), y)
}

/** The same with a model that is there already, for many waveforms. */
export function fitLateOnly(model: LateOnlyModel, y: Float64Array): LateOnlyFit {
  const { components, size, first, last, columns, n } = model
  const own = inCoordinates(model, [y])
  const { s, a, b, covariance, withoutFirst } = restrictedFit(components, own)
  const [beta, constant] = b
  const standardError = Math.sqrt(covariance[0])
  const interval: [number, number] = [beta - NORMAL_95 * standardError, beta + NORMAL_95 * standardError]

  const rest = new Float64Array(size)
  for (let i = 0; i < size; i++) rest[i] = own[i] - withoutFirst * components.fixed[1][i]
  const weights = gaussianWeights(model, solveComponents(components, s, a, rest))
  const filtered = transposeTimes(columns.filtered, n, weights)

  const count = last - first + 1
  const w = new Float64Array(n).fill(1 / count, first, last + 1)
  let meanUv = 0
  let lateMean = 0
  let largestUv = 0
  for (let i = first; i <= last; i++) {
    meanUv += y[i] / count
    lateMean += filtered[i] / count
    largestUv = Math.max(largestUv, Math.abs(y[i]))
  }
  const ofNoise = s * noiseVariance(model.noise, w) + a * noiseVariance(model.alpha, w) + model.residualUv ** 2 / count
  const grounds: VerdictGrounds = {
    interval,
    largestUv,
    meanUv,
    noiseOfMeanUv: Math.sqrt(ofNoise),
    lateShare: meanUv === 0 ? 0 : lateMean / meanUv,
  }
  const conditions = verdictConditions(grounds)
  return {
    beta,
    standardError,
    z: beta / standardError,
    interval,
    constant,
    noiseScale: s,
    alphaScale: a,
    lateShare: grounds.lateShare,
    verdict: lateOnlyVerdict(conditions),
    lateWaveform: { values: lateActivity(columns, weights), fromMs: model.startMs + columns.onset * model.stepMs },
    filtered,
    lateOnlyConstant: withoutFirst,
    conditions,
    grounds,
  }
}
