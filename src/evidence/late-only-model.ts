import type { NoiseSpec } from '../erp/noise.ts'
import { checkNoise } from '../erp/noise.ts'
import { LIMIT_TOLERANCE_SAMPLES, samplesInWindow, stepMs, type TimeWindow } from '../erp/time-axis.ts'
import type { Extent } from '../filter/apply-chain.ts'
import type { Chain } from '../filter/chain.ts'
import { type ActingStages, actingStages, actOn } from './acting-stages.ts'
import { type Cholesky, cholesky, choleskyOfLowRank, solveLower, solveUpper } from './cholesky.ts'
import { noiseCovariance, type NoiseCovariance, noiseMatrix } from './filtered-noise-covariance.ts'
import { type LateColumns, lateColumns } from './late-columns.ts'
import { type LowestCosines, lowestCosines } from './lowest-cosines.ts'
import type { VarianceComponents } from './restricted-likelihood.ts'
import { gramOfRows, rowProducts, transposed, transposeTimes } from './row-products.ts'
import { gaussianSum } from './squared-exponential.ts'
import { symmetricEigen } from './symmetric-eigen.ts'

/** What the late-only fit is told; windows and moments in ms on the axis of `timesMs`. */
export interface LateOnlyOptions {
  /** Evenly spaced sample times of y, at the chain's sampling rate. */
  readonly timesMs: Float64Array
  /** No evoked activity before this moment … */
  readonly t0Ms: number
  /** Window [a, b] of the early deflection. */
  readonly early: TimeWindow
  /** Noise of single trials before the chain. */
  readonly noise: NoiseSpec
  readonly trials: number
  /** What the chain was run on. */
  readonly extent: Extent
  /** … or this much earlier; default 30. */
  readonly onsetSlackMs?: number
  /** Standard deviation of late activity, default 10. */
  readonly sigmaUv?: number
  /** Correlation length of late activity, default 15 and never less. */
  readonly lengthMs?: number
  /** Rounding step of the table; at least 0.01 is used. */
  readonly roundingUv?: number
}

/**
 * The model y = K·x + β·K·e + c + n of one chain, noise, onset and window, in coordinates in which every covariance of it is cheap: with
 * A = K·Σx·Kᵀ + r²I = L·Lᵀ, the eigenvectors E of L⁻¹·C₀·L⁻ᵀ make M = A + s·C₀ + a·Cα the matrix I + s·Λ + a·V·Vᵀ.
 * Everything up to here hangs on neither y nor s nor a: one model serves many waveforms.
 */
export interface LateOnlyModel {
  readonly n: number
  readonly stages: ActingStages
  readonly stepMs: number
  readonly startMs: number
  /** Samples of the early window, both included. */
  readonly first: number
  readonly last: number
  readonly columns: LateColumns
  readonly noise: NoiseCovariance
  readonly alpha: NoiseCovariance
  readonly residualUv: number
  readonly cosines: LowestCosines | null
  readonly size: number
  /** F on the cosines: size × columns.count. */
  readonly reduced: Float64Array
  readonly factor: Cholesky
  readonly eigenvectors: Float64Array
  readonly components: VarianceComponents
}

export const DEFAULT_SLACK_MS = 30
export const DEFAULT_SIGMA_UV = 10
export const SHORTEST_LENGTH_MS = 15
export const LEAST_RESIDUAL_UV = 0.01
/** C_α is of this peak in a single trial, before the chain: `a` counts µV²/Hz. */
const ALPHA: NoiseSpec = {
  kind: 'model',
  exponent: 0,
  levelAt1HzUv2PerHz: 0,
  flatBelowHz: 0.02,
  whiteUv2PerHz: 0,
  alpha: { centreHz: 10, sdHz: 2, peakUv2PerHz: 1 },
  lines: [],
}
/** What the factor of C_α leaves out, of its largest diagonal element. */
const ALPHA_TOLERANCE = 1e-10

/** @throws RangeError for options that are none, or samples that are too few for the chain's padding or too many for the fit. */
export function lateOnlyModel(chain: Chain, options: LateOnlyOptions): LateOnlyModel {
  const { timesMs, early, trials, extent } = options
  const step = checkOptions(chain, options)
  const n = timesMs.length
  const stages = actingStages(chain, extent)
  const { first, last } = samplesInWindow(timesMs, early, 'the early window')
  const slack = options.onsetSlackMs ?? DEFAULT_SLACK_MS
  const onset = Math.ceil((options.t0Ms - slack - timesMs[0]) / step - LIMIT_TOLERANCE_SAMPLES)
  const cosines = lowestCosines(n, chain.samplingRateHz)
  const size = cosines?.count ?? n
  const sum = gaussianSum(options.sigmaUv ?? DEFAULT_SIGMA_UV, (options.lengthMs ?? SHORTEST_LENGTH_MS) / step)
  const columns = lateColumns(stages, n, onset, sum)
  const reduced = cosines
    ? rowProducts(cosines.rows, size, columns.filtered, columns.count, n)
    : transposed(columns.filtered, columns.count, n)

  const residualUv = Math.max(LEAST_RESIDUAL_UV, options.roundingUv ?? 0)
  const a = gramOfRows(reduced, size, columns.count)
  for (let i = 0; i < size; i++) a[i * size + i] += residualUv ** 2
  const factor = cholesky(a, size)

  const noise = noiseCovariance(stages, options.noise, trials, n)
  let whitened = noiseMatrix(noise, cosines)
  solveLower(factor, whitened, size)
  whitened = transposed(whitened, size, size)
  solveLower(factor, whitened, size)
  for (let i = 0; i < size; i++) {
    for (let j = 0; j < i; j++) {
      whitened[i * size + j] = whitened[j * size + i] = (whitened[i * size + j] + whitened[j * size + i]) / 2
    }
  }
  const eigen = symmetricEigen(whitened, size)

  const alpha = noiseCovariance(stages, ALPHA, trials, n)
  const { columns: alphaColumns, rank } = choleskyOfLowRank(noiseMatrix(alpha, cosines), size, ALPHA_TOLERANCE)
  const whiten = (rows: Float64Array, count: number) => whitenRows(factor, eigen.vectors, rows, count)
  const ke = actOn(stages, raisedCosine(timesMs, early, first, last), first, n)
  const fixed = whiten(reduce(cosines, [ke, new Float64Array(n).fill(1)]), 2)
  const components: VarianceComponents = {
    size,
    lambda: eigen.values.map((value) => Math.max(0, value)),
    columns: whiten(alphaColumns, rank),
    rank,
    fixed: [fixed.slice(0, size), fixed.slice(size)],
    kept: new Map(),
  }
  return {
    n,
    stages,
    stepMs: step,
    startMs: timesMs[0],
    first,
    last,
    columns,
    noise,
    alpha,
    residualUv,
    cosines,
    size,
    reduced,
    factor,
    eigenvectors: eigen.vectors,
    components,
  }
}

/** Waveforms of n samples in the model's coordinates, one after another. */
export function inCoordinates(model: LateOnlyModel, waveforms: readonly Float64Array[]): Float64Array {
  return whitenRows(model.factor, model.eigenvectors, reduce(model.cosines, waveforms), waveforms.length)
}

/** Weights û = (K·Φ)ᵀ·M⁻¹·r of the late activity's Gaussians, from M⁻¹·r in the model's coordinates. */
export function gaussianWeights(model: LateOnlyModel, solved: Float64Array): Float64Array {
  const back = transposeTimes(model.eigenvectors, model.size, solved)
  solveUpper(model.factor, back)
  return transposeTimes(model.reduced, model.columns.count, back)
}

/** e: (1 + cos 2π(t − mid)/(b − a))/2 at samples first … last. */
export function raisedCosine(
  timesMs: Float64Array,
  { fromMs, toMs }: TimeWindow,
  first: number,
  last: number,
): Float64Array {
  const middle = (fromMs + toMs) / 2
  return Float64Array.from({ length: last - first + 1 }, (_, i) => {
    return (1 + Math.cos((2 * Math.PI * (timesMs[first + i] - middle)) / (toMs - fromMs))) / 2
  })
}

function reduce(cosines: LowestCosines | null, waveforms: readonly Float64Array[]): Float64Array {
  const n = waveforms[0].length
  const rows = new Float64Array(waveforms.length * n)
  waveforms.forEach((waveform, k) => rows.set(waveform, k * n))
  return cosines ? rowProducts(rows, waveforms.length, cosines.rows, cosines.count, n) : rows
}

/** E·L⁻¹ times each row. */
function whitenRows(factor: Cholesky, vectors: Float64Array, rows: Float64Array, count: number): Float64Array {
  const { size } = factor
  const columns = transposed(rows, count, size)
  solveLower(factor, columns, count)
  return rowProducts(transposed(columns, size, count), count, vectors, size, size)
}

/** @returns the step in ms. */
function checkOptions(chain: Chain, options: LateOnlyOptions): number {
  const { timesMs, early, t0Ms } = options
  const step = stepMs(timesMs)
  const rateHz = chain.samplingRateHz
  if (!(Math.abs((step * rateHz) / 1000 - 1) * timesMs.length <= 0.5)) {
    throw new RangeError(
      `timesMs must have the chain’s sampling rate (every ${1000 / rateHz} ms), had every ${step} ms`,
    )
  }
  const atLeast = (what: string, value: number, least: number) => {
    if (!(value >= least) || !Number.isFinite(value)) {
      throw new RangeError(`${what} must be finite and at least ${least}, was ${value}`)
    }
  }
  const end = timesMs[timesMs.length - 1]
  if (!(t0Ms >= timesMs[0] && t0Ms <= end)) {
    throw new RangeError(`t0Ms must lie in the epoch (${timesMs[0]} to ${end} ms), was ${t0Ms}`)
  }
  if (!(early.toMs - early.fromMs >= 4 * step)) {
    throw new RangeError(
      `the early window must last at least 4 samples (${4 * step} ms), was ${early.fromMs} to ${early.toMs} ms`,
    )
  }
  atLeast('trials', options.trials, 1)
  atLeast('onsetSlackMs', options.onsetSlackMs ?? DEFAULT_SLACK_MS, 0)
  atLeast('sigmaUv', options.sigmaUv ?? DEFAULT_SIGMA_UV, 1e-3)
  atLeast('lengthMs', options.lengthMs ?? SHORTEST_LENGTH_MS, SHORTEST_LENGTH_MS)
  atLeast('roundingUv', options.roundingUv ?? 0, 0)
  checkNoise(options.noise)
  return step
}
