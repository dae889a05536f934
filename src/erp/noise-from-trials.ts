import { requireFinite } from '../filter/missing-values.ts'
import { realTransform } from '../filter/fourier.ts'
import type { NoiseTable } from './noise.ts'

/** What single trials of one condition and channel say about the average and its noise. */
export interface TrialsSummary {
  readonly trials: number
  readonly averageUv: Float64Array
  /** Standard error of the average at each sample: SD over trials (N − 1) / √N. */
  readonly standardErrorUv: Float64Array
  /**
   * The average with alternating signs: what is evoked cancels, its noise has the variance of the average's. Of an odd count
   * the two halves are averaged apart, so that it cancels all the same.
   */
  readonly plusMinusUv: Float64Array
}

/** A noise spectrum measured on single trials, and continued below what their length can show. */
export interface EstimatedNoise {
  /** Of single trials, with everything in it that they had passed. */
  readonly noise: NoiseTable
  /** 2/T: below this frequency the table is the fitted power law. */
  readonly extrapolatedBelowHz: number
  readonly exponent: number
  readonly levelAt1HzUv2PerHz: number
  /** Trials × trial length, s. */
  readonly trials: number
  readonly secondsOfTrial: number
}

/** A result of which more than this part of the variance comes from the extrapolated frequencies "rests on extrapolated noise". */
export const EXTRAPOLATED_MARK = 0.2

const FIT_TO_HZ = 20
/** As in the noise model: power laws are flat below. */
const FLAT_BELOW_HZ = 0.02
const BANDS_PER_OCTAVE = 12
const FEWEST_SAMPLES = 16
/** Fewer bands between 2/T and 20 Hz do not carry a power law. */
const FEWEST_BANDS = 5

/**
 * Average, standard error and plus–minus average.
 *
 * @param trials one array a trial, of one length, µV.
 * @throws RangeError for fewer than 2 trials, trials of different lengths, or values that are not finite.
 */
export function summariseTrials(trials: readonly Float64Array[]): TrialsSummary {
  const { count, samples } = checkTrials(trials)
  const averageUv = meanOf(trials)
  const squares = new Float64Array(samples)
  for (const trial of trials) for (let i = 0; i < samples; i++) squares[i] += (trial[i] - averageUv[i]) ** 2
  const standardErrorUv = squares.map((sum) => Math.sqrt(sum / (count - 1) / count))
  const plus = trials.filter((_, i) => i % 2 === 0)
  const minus = trials.filter((_, i) => i % 2 === 1)
  const plusMean = meanOf(plus)
  const minusMean = meanOf(minus)
  // half the difference of two means of a and b trials has the variance N/(4ab)
  const scale = Math.sqrt(plus.length * minus.length) / count
  return {
    trials: count,
    averageUv,
    standardErrorUv,
    plusMinusUv: plusMean.map((value, i) => scale * (value - minusMean[i])),
  }
}

/**
 * The noise density of single trials: N times the density of the plus–minus average, averaged over all balanced signs.
 *
 * Over all sign vectors that sum to 0 the mean of |Σ ±X|²/N² is Σ|X − X̄|²/(N(N − 1)), so that no signs need be drawn: S is the
 * variance over trials (N − 1) of the trials' own transforms. It holds for odd N too, and has 2(N − 1) degrees of freedom a frequency
 * instead of the 2 of one choice of signs.
 *
 * Hann taper, whose zero at 2/T keeps offsets out of the lowest frequency, after a straight line through each trial's residual has
 * been taken off, which keeps slow drift out of the higher ones. Bands of 1/12 octave, at least one frequency (1/T) wide. Below 2/T: a power law fitted to 2/T–20 Hz
 * (least squares in log power over log frequency, every band weighing its width in octaves, an alpha peak let stand beside it and
 * outlying bands weighed down, so that neither tilts it), down to 0.02 Hz and flat below. The exponent is kept between 0 and 4.
 *
 * @param trials one array a trial, of one length, µV; artefacts already rejected.
 * @throws RangeError as `summariseTrials`; for trials too short to fit a power law below 20 Hz; for trials that are all equal.
 */
export function noiseFromTrials(trials: readonly Float64Array[], samplingRateHz: number): EstimatedNoise {
  const { count, samples } = checkTrials(trials)
  if (!(samplingRateHz > 0) || !Number.isFinite(samplingRateHz)) {
    throw new RangeError(`samplingRateHz must be positive and finite, was ${samplingRateHz}`)
  }
  const seconds = samples / samplingRateHz
  const bands = bandsOf(densityOverTrials(trials, count, samples, samplingRateHz), seconds)
  const fitted = bands.filter(({ hz }) => hz <= FIT_TO_HZ)
  if (fitted.length < FEWEST_BANDS) {
    throw new RangeError(
      `trials must be longer for a noise spectrum (from 2/T to ${FIT_TO_HZ} Hz there must be ${FEWEST_BANDS} bands), were ${seconds} s`,
    )
  }
  if (!(fitted[0].density > 0))
    throw new RangeError('trials must differ from one another to have noise, were all equal')
  const { exponent, level } = fitPowerLaw(fitted)
  const lowest = 2 / seconds
  const hz: number[] = []
  const densities: number[] = []
  // just below 2/T, where the first measured value stands
  const joinHz = 0.98 * lowest
  for (const at of joinHz > FLAT_BELOW_HZ ? [FLAT_BELOW_HZ, joinHz] : []) {
    hz.push(at)
    densities.push(level * at ** -exponent)
  }
  for (const band of bands) {
    hz.push(band.hz)
    densities.push(band.density)
  }
  return {
    noise: { kind: 'table', hz: Float64Array.from(hz), uv2PerHz: Float64Array.from(densities) },
    extrapolatedBelowHz: lowest,
    exponent,
    levelAt1HzUv2PerHz: level,
    trials: count,
    secondsOfTrial: seconds,
  }
}

/** S at the multiples of 1/T. */
function densityOverTrials(
  trials: readonly Float64Array[],
  count: number,
  samples: number,
  samplingRateHz: number,
): Float64Array {
  const mean = meanOf(trials)
  const taper = Float64Array.from({ length: samples }, (_, i) => 1 - Math.cos((2 * Math.PI * (i + 0.5)) / samples))
  let squares = 0
  for (const value of taper) squares += value * value
  const density = new Float64Array(Math.floor(samples / 2) + 1)
  const tapered = new Float64Array(samples)
  for (const trial of trials) {
    for (let i = 0; i < samples; i++) tapered[i] = trial[i] - mean[i]
    removeLine(tapered)
    for (let i = 0; i < samples; i++) tapered[i] *= taper[i]
    const { re, im } = realTransform(tapered)
    for (let k = 0; k < density.length; k++) density[k] += re[k] * re[k] + im[k] * im[k]
  }
  const scale = 2 / (samplingRateHz * squares * (count - 1))
  for (let k = 0; k < density.length; k++) density[k] *= scale
  return density
}

/** Takes a least-squares straight line off, in place. */
function removeLine(values: Float64Array): void {
  const n = values.length
  const middle = (n - 1) / 2
  let sum = 0
  let moment = 0
  for (let i = 0; i < n; i++) {
    sum += values[i]
    moment += (i - middle) * values[i]
  }
  const slope = moment / ((n * (n * n - 1)) / 12)
  for (let i = 0; i < n; i++) values[i] -= sum / n + slope * (i - middle)
}

interface Band {
  hz: number
  density: number
  octaves: number
}

/** Means over bands from 2/T up to below half the sampling rate, where the one-sided density ends. */
function bandsOf(density: Float64Array, seconds: number): Band[] {
  const bands: Band[] = []
  const end = density.length - 1
  let from = 2
  while (from < end) {
    const width = Math.max(1, Math.round(from * (2 ** (1 / BANDS_PER_OCTAVE) - 1)))
    const to = Math.min(end, from + width)
    let sum = 0
    for (let k = from; k < to; k++) sum += density[k]
    const centre = (from + to - 1) / 2
    bands.push({
      hz: centre / seconds,
      density: sum / (to - from),
      octaves: Math.log2((to - 0.5) / (from - 0.5)),
    })
    from = to
  }
  return bands
}

/** Centres and SDs of the alpha peak that is let stand beside the power law, Hz. */
const ALPHA_CENTRES_HZ = [7, 7.5, 8, 8.5, 9, 9.5, 10, 10.5, 11, 11.5, 12, 12.5, 13]
const ALPHA_SDS_HZ = [0.75, 1, 1.5, 2, 2.5]

/**
 * log S = log level − exponent·log f + an alpha hump of any height ≥ 0 in log power, the hump's place and width from a small grid;
 * weighted least squares, with Tukey's bisquare over the scale of the residuals (20 rounds).
 */
function fitPowerLaw(bands: readonly Band[]): { exponent: number; level: number } {
  const x = bands.map(({ hz }) => Math.log(hz))
  const y = bands.map(({ density }) => Math.log(Math.max(density, 1e-300)))
  // 12 and more bands: two parameters of the line, and a hump that must not stand for the line itself
  const humps = bands.length < 12 ? [] : humpsOn(bands)
  let trust = bands.map(() => 1)
  let exponent = 0
  let offset = 0
  for (let round = 0; round < 20; round++) {
    const weights = bands.map(({ octaves }, i) => octaves * trust[i])
    let best = y
    let least = residualSquares(lineThrough(x, y, weights).residuals, weights)
    for (const hump of humps) {
      const rest = lineThrough(x, hump, weights).residuals
      const size = residualSquares(rest, weights)
      const along = lineThrough(x, y, weights).residuals.reduce((sum, r, i) => sum + weights[i] * r * rest[i], 0)
      const height = size > 1e-9 ? along / size : 0
      if (height <= 0) continue
      const without = y.map((value, i) => value - height * hump[i])
      const squares = residualSquares(lineThrough(x, without, weights).residuals, weights)
      if (squares < least) {
        least = squares
        best = without
      }
    }
    const line = lineThrough(x, best, weights)
    exponent = Math.min(4, Math.max(0, -line.slope))
    offset = line.offset + (line.slope + exponent) * line.middle
    const sizes = line.residuals.map(Math.abs).sort((a, b) => a - b)
    // 1.4826 times the median size is the SD of normal residuals; 4.685 keeps 95 % efficiency (Holland & Welsch 1977)
    const reach = 4.685 * Math.max(1e-6, 1.4826 * sizes[sizes.length >> 1])
    trust = line.residuals.map((r) => (Math.abs(r) < reach ? (1 - (r / reach) ** 2) ** 2 : 0))
  }
  return { exponent, level: Math.exp(offset) }
}

function humpsOn(bands: readonly Band[]): number[][] {
  const humps: number[][] = []
  for (const centre of ALPHA_CENTRES_HZ)
    for (const sd of ALPHA_SDS_HZ) humps.push(bands.map(({ hz }) => Math.exp(-0.5 * ((hz - centre) / sd) ** 2)))
  return humps
}

function residualSquares(residuals: readonly number[], weights: readonly number[]): number {
  return residuals.reduce((sum, r, i) => sum + weights[i] * r * r, 0)
}

/** Weighted least squares of a straight line. */
function lineThrough(x: readonly number[], y: readonly number[], weights: readonly number[]) {
  let [s, sx, sy] = [0, 0, 0]
  for (let i = 0; i < x.length; i++) {
    s += weights[i]
    sx += weights[i] * x[i]
    sy += weights[i] * y[i]
  }
  const middle = sx / s
  let [square, product] = [0, 0]
  for (let i = 0; i < x.length; i++) {
    square += weights[i] * (x[i] - middle) ** 2
    product += weights[i] * (x[i] - middle) * (y[i] - sy / s)
  }
  const slope = product / square
  const offset = sy / s - slope * middle
  return { slope, offset, middle, residuals: y.map((value, i) => value - offset - slope * x[i]) }
}

function meanOf(trials: readonly Float64Array[]): Float64Array {
  const mean = new Float64Array(trials[0].length)
  for (const trial of trials) for (let i = 0; i < mean.length; i++) mean[i] += trial[i]
  for (let i = 0; i < mean.length; i++) mean[i] /= trials.length
  return mean
}

function checkTrials(trials: readonly Float64Array[]): { count: number; samples: number } {
  if (trials.length < 2) throw new RangeError(`trials must be at least 2, were ${trials.length}`)
  const samples = trials[0].length
  if (samples < FEWEST_SAMPLES)
    throw new RangeError(`trials must hold at least ${FEWEST_SAMPLES} samples, had ${samples}`)
  trials.forEach((trial, i) => {
    if (trial.length !== samples) {
      throw new RangeError(`trials must be of one length (${samples} samples), trials[${i}] had ${trial.length}`)
    }
    requireFinite(`trials[${i}]`, trial)
  })
  return { count: trials.length, samples }
}
