import { baselineWeights, correctBaseline, type Baseline } from './baseline.ts'
import { fractionalAreaLatency } from './fractional-area-latency.ts'
import { meanAmplitude, meanAmplitudeWeights } from './mean-amplitude.ts'
import { momentWeights } from './moment.ts'
import { onsetLatency } from './onset-latency.ts'
import { findPeak, type Polarity } from './peak.ts'
import { signedArea, signedAreaWeights } from './signed-area.ts'
import { checkValues } from './time-axis.ts'

export type ScoreKind =
  | 'mean'
  | 'area'
  | 'peak-amplitude'
  | 'peak-latency'
  | 'area-latency'
  | 'onset-latency'
  | 'moment'

/** The one number that a study analyses. Peak-to-peak is two peak scores. */
export interface Score {
  kind: ScoreKind
  fromMs: number
  /** A moment has toMs = fromMs. */
  toMs: number
  /** The side of areas, peaks and latencies; a mean and a moment do not look at it. */
  polarity: Polarity
  /** Of area latency and onset latency, 0 < fraction < 1; 0.5 where absent. */
  fraction?: number
}

/** Why a waveform has no such number. */
export type NoScore = 'no peak' | 'no area' | 'no onset'

/**
 * A score of a waveform (which has had its baseline correction): ms for latencies, µV·s for areas, else µV.
 *
 * @param y       µV, one finite value per time.
 * @param timesMs evenly spaced sample times.
 * @returns the number, or why there is none.
 * @throws RangeError for values that are not finite, a window that leaves the epoch or holds no sample (an area: fewer
 *   than 2), a fraction outside 0..1, a moment whose limits differ.
 */
export function scoreOf(y: Float64Array, timesMs: Float64Array, score: Score): number | NoScore {
  checkValues(y, timesMs)
  checkScore(score)
  const { polarity, fraction = 0.5 } = score
  switch (score.kind) {
    case 'mean':
      return meanAmplitude(y, timesMs, score)
    case 'moment':
      return weighted(momentWeights(timesMs, score.fromMs), y)
    case 'area':
      return signedArea(y, timesMs, score, polarity)
    case 'peak-amplitude':
    case 'peak-latency': {
      const peak = findPeak(y, timesMs, score, polarity)
      if (peak === 'no peak') return peak
      return score.kind === 'peak-amplitude' ? peak.amplitudeUv : peak.latencyMs
    }
    case 'area-latency':
      return fractionalAreaLatency(y, timesMs, score, polarity, fraction)
    case 'onset-latency':
      return onsetLatency(y, timesMs, score, polarity, fraction)
  }
}

/** The unit of a score's values. */
export function scoreUnit(kind: ScoreKind): 'µV' | 'ms' | 'µV·s' {
  if (kind === 'area') return 'µV·s'
  return kind === 'peak-latency' || kind === 'area-latency' || kind === 'onset-latency' ? 'ms' : 'µV'
}

/** Whether a score has weights at all, and whether they hang on the waveform. */
export function scoreLinearity(kind: ScoreKind): 'linear' | 'held fixed' | 'none' {
  if (kind === 'mean' || kind === 'moment') return 'linear'
  return kind === 'peak-amplitude' || kind === 'area' ? 'held fixed' : 'none'
}

/**
 * The weights of a score with its baseline: `Σ w[n]·y[n]` is the score of the baseline-corrected y.
 *
 * A mean and a moment are linear. A peak's weights are the parabola's three at the moment where y has its peak, a signed area's
 * the trapezoids of the samples on the stated side; both are held fixed. The baseline's weights are subtracted, times the sum
 * of the score's own.
 *
 * @param y the filtered waveform (baseline-corrected or not), needed for peaks and areas only.
 * @throws RangeError as `scoreOf`; for latencies, which are no weighted sums; for a peak or an area without y; for a peak where y
 *   has none.
 */
export function scoreWeights(score: Score, baseline: Baseline, timesMs: Float64Array, y?: Float64Array): Float64Array {
  checkScore(score)
  const weights = ownWeights(score, baseline, timesMs, y)
  if (baseline !== 'none') {
    const ofBaseline = baselineWeights(baseline, timesMs)
    let total = 0
    for (let i = 0; i < weights.length; i++) total += weights[i]
    for (let i = 0; i < weights.length; i++) weights[i] -= total * ofBaseline[i]
  }
  return weights
}

function ownWeights(score: Score, baseline: Baseline, timesMs: Float64Array, y?: Float64Array): Float64Array {
  switch (score.kind) {
    case 'mean':
      return meanAmplitudeWeights(timesMs, score)
    case 'moment':
      return momentWeights(timesMs, score.fromMs)
    case 'area':
      return signedAreaWeights(corrected(score, baseline, timesMs, y), timesMs, score, score.polarity)
    case 'peak-amplitude': {
      const peak = findPeak(corrected(score, baseline, timesMs, y), timesMs, score, score.polarity)
      if (peak === 'no peak') {
        throw new RangeError(`a peak's weights need a peak, y has none from ${score.fromMs} to ${score.toMs} ms`)
      }
      const weights = new Float64Array(timesMs.length)
      weights.set(peak.weights, peak.weightsFrom)
      return weights
    }
    default:
      throw new RangeError(
        `score.kind must be a weighted sum of samples (mean, moment, area or peak-amplitude), was ${score.kind}`,
      )
  }
}

function corrected(score: Score, baseline: Baseline, timesMs: Float64Array, y?: Float64Array): Float64Array {
  if (y === undefined) throw new RangeError(`the weights of score.kind ${score.kind} need the filtered waveform y`)
  return correctBaseline(y, timesMs, baseline)
}

function checkScore(score: Score): void {
  const { fraction } = score
  if (fraction !== undefined && !(fraction > 0 && fraction < 1)) {
    throw new RangeError(`score.fraction must lie between 0 and 1, was ${fraction}`)
  }
  if (score.kind === 'moment' && score.fromMs !== score.toMs) {
    throw new RangeError(`score.toMs of a moment must equal its fromMs (${score.fromMs}), was ${score.toMs}`)
  }
  if (score.polarity !== 'positive' && score.polarity !== 'negative') {
    throw new RangeError(`score.polarity must be positive or negative, was ${score.polarity}`)
  }
}

function weighted(weights: Float64Array, y: Float64Array): number {
  let sum = 0
  for (let i = 0; i < y.length; i++) sum += weights[i] * y[i]
  return sum
}
