import { noiseDensityAt, type NoiseSpec } from '../erp/noise.ts'
import { type Complex, nextPowerOfTwo, realTransform } from '../filter/fourier.ts'
import type { Stage } from '../filter/stage.ts'
import { stageResponse } from '../filter/stage-response.ts'
import { noiseAutocovariance } from '../erp/noise-autocovariance.ts'
import { breaksOf, spectrumAfter } from './filtered-noise.ts'
import { gaussLegendre } from './gauss-legendre.ts'
import { randomLines, responseLimits } from './score-noise.ts'
import { varianceOfWeights } from './variance-of-weights.ts'
import { directTransform } from './window-power.ts'

/** Weights on the samples of an epoch of noise that some stages have acted on as continuous. */
export interface NoiseTerm {
  readonly weights: Float64Array
  readonly stages: readonly Stage[]
  readonly factor: number
}

/** A linear score of the same noise seen at several points of a chain: after − before has two terms. */
export type NoiseProbe = readonly NoiseTerm[]

const RULE = gaussLegendre(8)

/**
 * Covariances of linear scores that all hang on one noise, for one trial, in the products of their units: the real part of
 * ∫₀^{fs/2} S·G_i·conj(G_j) df with G the sum over a score's terms of factor·H·W, W the transform of the weights and H the
 * response of the stages, and (A²/2)·G_i·conj(G_j) for lines of random phase. Lines locked to the event add nothing.
 *
 * Gauss–Legendre panels of at most a quarter octave and at most one oscillation of what an epoch and the kernels' taps make, with limits at the
 * noise's kinks and wherever a response changes quickly. Where every term has seen the same stages, no response is left to integrate against, and the
 * noise's autocovariance serves as well (`varianceOfWeights`).
 *
 * @param probes weights of all of them on the same samples. What was made of weights, noise and stages is kept by their identity: do not
 *   change them afterwards.
 * @param way  which of the two, where both serve: by lags for weights that are new every time, by frequencies for stages that are.
 * @returns rows of a symmetric matrix.
 * @throws RangeError for a noise that is refused.
 */
export function scoreCovariance(
  probes: readonly NoiseProbe[],
  noise: NoiseSpec,
  samplingRateHz: number,
  way: 'by lags' | 'by frequencies' = 'by lags',
): number[][] {
  const terms = probes.flat()
  const matrix = probes.map(() => new Array<number>(probes.length).fill(0))
  if (terms.length === 0) return matrix
  const longest = Math.max(...terms.map(({ weights }) => weights.length))
  const together = terms.every(({ stages }) => sameStages(stages, terms[0].stages))
  if (together && way === 'by lags') addByLags(matrix, probes, longest, noise, samplingRateHz)
  else addByFrequencies(matrix, probes, longest, noise, samplingRateHz)
  addLines(matrix, probes, noise, samplingRateHz)
  return matrix
}

const sameStages = (a: readonly Stage[], b: readonly Stage[]) => a.length === b.length && a.every((s, i) => s === b[i])

/** Σ of the terms' weights, which all meet the same noise. */
function weightsOf(probe: NoiseProbe, samples: number): Float64Array {
  const sum = new Float64Array(samples)
  for (const { weights, factor } of probe) for (let i = 0; i < weights.length; i++) sum[i] += factor * weights[i]
  return sum
}

function addByLags(
  matrix: number[][],
  probes: readonly NoiseProbe[],
  samples: number,
  noise: NoiseSpec,
  samplingRateHz: number,
): void {
  const covariance = autocovarianceAfter(probes.flat()[0].stages, noise, samplingRateHz, samples)
  const sums = probes.map((probe) => weightsOf(probe, samples))
  sums.forEach((first, i) => {
    matrix[i][i] += varianceOfWeights(first, covariance)
    for (let j = 0; j < i; j++) {
      const second = sums[j]
      const plus = varianceOfWeights(
        first.map((value, k) => value + second[k]),
        covariance,
      )
      const minus = varianceOfWeights(
        first.map((value, k) => value - second[k]),
        covariance,
      )
      matrix[i][j] += (plus - minus) / 4
      matrix[j][i] = matrix[i][j]
    }
  })
}

interface Lags {
  readonly stages: readonly Stage[]
  readonly samplingRateHz: number
  readonly covariance: Float64Array
}

/** The last few of each noise: a search over cutoffs asks for the same again and again. */
const keptLags = new WeakMap<NoiseSpec, Lags[]>()
const KEPT = 4

function autocovarianceAfter(
  stages: readonly Stage[],
  noise: NoiseSpec,
  samplingRateHz: number,
  samples: number,
): Float64Array {
  let entries = keptLags.get(noise)
  if (!entries) keptLags.set(noise, (entries = []))
  const found = entries.find(
    (entry) =>
      entry.samplingRateHz === samplingRateHz && entry.covariance.length >= samples && sameStages(entry.stages, stages),
  )
  if (found) return found.covariance
  const covariance = noiseAutocovariance(spectrumAfter(stages, noise, samplingRateHz), samplingRateHz, samples)
  entries.unshift({ stages, samplingRateHz, covariance })
  if (entries.length > KEPT) entries.pop()
  return covariance
}

/** Nodes of an integral over S, and what was asked for at them. */
interface Grid {
  readonly hz: Float64Array
  /** Weight of the rule times S. */
  readonly masses: Float64Array
  readonly transforms: WeakMap<Float64Array, Complex>
  readonly responses: WeakMap<Stage, Complex>
}

const keptGrids = new WeakMap<NoiseSpec, Map<string, Grid>>()

function addByFrequencies(
  matrix: number[][],
  probes: readonly NoiseProbe[],
  samples: number,
  noise: NoiseSpec,
  samplingRateHz: number,
): void {
  const stages = [...new Set(probes.flatMap((probe) => probe.flatMap((term) => term.stages)))]
  const grid = gridFor(stages, samples, noise, samplingRateHz)
  const spectra = probes.map((probe) => spectrumOf(probe, grid, samplingRateHz))
  const { masses } = grid
  spectra.forEach((a, i) => {
    for (let j = 0; j <= i; j++) {
      const b = spectra[j]
      let sum = 0
      for (let k = 0; k < masses.length; k++) sum += masses[k] * (a.re[k] * b.re[k] + a.im[k] * b.im[k])
      matrix[i][j] += sum
      matrix[j][i] = matrix[i][j]
    }
  })
}

function gridFor(stages: readonly Stage[], samples: number, noise: NoiseSpec, samplingRateHz: number): Grid {
  const nyquist = samplingRateHz / 2
  // taps make a response oscillate just as samples make a transform; a power of two, so that one grid serves neighbouring lengths
  const taps = stages.reduce((sum, stage) => sum + (stage.taps?.length ?? 0), 0)
  const widestHz = samplingRateHz / 2 ** Math.ceil(Math.log2(Math.max(16, samples + taps)))
  const narrow = stages.filter(({ spec }) => spec.design !== 'windowed-sinc' && spec.design !== 'moving-average')
  const breaks = breaksOf(narrow, samplingRateHz)
  const key = [samplingRateHz, widestHz, ...breaks].join()
  let grids = keptGrids.get(noise)
  if (!grids) keptGrids.set(noise, (grids = new Map()))
  const found = grids.get(key)
  if (found) return found
  const limits = [...responseLimits(noise, nyquist), ...breaks].sort((a, b) => a - b)
  const hz: number[] = []
  const masses: number[] = []
  const density = noiseDensityAt(noise)
  for (let p = 0; p + 1 < limits.length; p++) {
    const width = limits[p + 1] - limits[p]
    if (!(width > 1e-12 * nyquist)) continue
    const pieces = Math.ceil(width / widestHz)
    const half = width / pieces / 2
    for (let piece = 0; piece < pieces; piece++) {
      for (let i = 0; i < RULE.nodes.length; i++) {
        const at = limits[p] + half * (2 * piece + 1 + RULE.nodes[i])
        hz.push(at)
        masses.push(half * RULE.weights[i] * density(at))
      }
    }
  }
  const grid: Grid = {
    hz: Float64Array.from(hz),
    masses: Float64Array.from(masses),
    transforms: new WeakMap(),
    responses: new WeakMap(),
  }
  if (grids.size >= KEPT) grids.clear()
  grids.set(key, grid)
  return grid
}

function spectrumOf(probe: NoiseProbe, grid: Grid, samplingRateHz: number): Complex {
  const count = grid.hz.length
  const sum = { re: new Float64Array(count), im: new Float64Array(count) }
  for (const { weights, stages, factor } of probe) {
    if (factor === 0) continue
    const w = transformOf(weights, grid, samplingRateHz)
    const h = stages.map((stage) => responseOf(stage, grid))
    for (let k = 0; k < count; k++) {
      let re = factor * w.re[k]
      let im = factor * w.im[k]
      for (const response of h) {
        const product = re * response.re[k] - im * response.im[k]
        im = re * response.im[k] + im * response.re[k]
        re = product
      }
      sum.re[k] += re
      sum.im[k] += im
    }
  }
  return sum
}

function transformOf(weights: Float64Array, grid: Grid, samplingRateHz: number): Complex {
  const kept = grid.transforms.get(weights)
  if (kept) return kept
  const transform = transformAt(weights, grid.hz, samplingRateHz)
  grid.transforms.set(weights, transform)
  return transform
}

/** Sums over more products than this go by a Fourier transform instead. */
const MOST_PRODUCTS = 2 ** 21

/** Σ weights[m]·e^(−j2πf·m/fs) at many frequencies. */
function transformAt(weights: Float64Array, hz: Float64Array, samplingRateHz: number): Complex {
  let from = 0
  let to = weights.length
  while (from < to && weights[from] === 0) from++
  while (to > from && weights[to - 1] === 0) to--
  const seen = weights.subarray(from, to)
  const middle = from + (seen.length >> 1)
  const many = seen.length * hz.length > MOST_PRODUCTS
  const at = many ? interpolated(seen) : (cycles: number) => aboutMiddle(seen, cycles)
  const re = new Float64Array(hz.length)
  const im = new Float64Array(hz.length)
  for (let k = 0; k < hz.length; k++) {
    const cycles = hz[k] / samplingRateHz
    const value = at(cycles)
    const turns = middle * cycles
    const angle = -2 * Math.PI * (turns - Math.round(turns))
    const c = Math.cos(angle)
    const s = Math.sin(angle)
    re[k] = value.re * c - value.im * s
    im[k] = value.re * s + value.im * c
  }
  return { re, im }
}

/** The transform with time counted from the middle sample, about which it turns slowest. */
function aboutMiddle(seen: Float64Array, cycles: number): { re: number; im: number } {
  const { re, im } = directTransform(seen, cycles)
  const turns = (seen.length >> 1) * cycles
  const angle = 2 * Math.PI * (turns - Math.round(turns))
  const c = Math.cos(angle)
  const s = Math.sin(angle)
  return { re: re * c - im * s, im: re * s + im * c }
}

/** Length of the transform over that of the weights, and the samples of it that an interpolation takes. */
const OVERSAMPLING = 8
const BARYCENTRIC = Float64Array.of(1, -11, 55, -165, 330, -462, 462, -330, 165, -55, 11, -1)
/** Bins below which the transform is summed directly, because it may fall there by many powers of ten. */
const DIRECT_BINS = 16

/**
 * The same read from a zero-padded transform of 8 times the length through 12 neighbours (barycentric Lagrange): as `windowPower`, but of the transform itself,
 * which turns half as fast as its square.
 */
function interpolated(seen: Float64Array): (cycles: number) => { re: number; im: number } {
  const size = nextPowerOfTwo(Math.max(OVERSAMPLING * seen.length, 8 * DIRECT_BINS))
  const centred = new Float64Array(size)
  const middle = seen.length >> 1
  for (let m = 0; m < seen.length; m++) centred[(m - middle + size) % size] = seen[m]
  const { re, im } = realTransform(centred, size)
  const half = size / 2
  return (cycles) => {
    const position = cycles * size
    if (position < DIRECT_BINS) return aboutMiddle(seen, cycles)
    const first = Math.floor(position) - BARYCENTRIC.length / 2 + 1
    let numeratorRe = 0
    let numeratorIm = 0
    let denominator = 0
    for (let k = 0; k < BARYCENTRIC.length; k++) {
      const at = first + k
      // beyond fs/2 lies the mirror image, conjugated
      const bin = at > half ? size - at : at
      const valueIm = at > half ? -im[bin] : im[bin]
      if (position === at) return { re: re[bin], im: valueIm }
      const share = BARYCENTRIC[k] / (position - at)
      numeratorRe += share * re[bin]
      numeratorIm += share * valueIm
      denominator += share
    }
    return { re: numeratorRe / denominator, im: numeratorIm / denominator }
  }
}

function responseOf(stage: Stage, grid: Grid): Complex {
  const kept = grid.responses.get(stage)
  if (kept) return kept
  const response = stageResponse(stage, grid.hz)
  grid.responses.set(stage, response)
  return response
}

function addLines(matrix: number[][], probes: readonly NoiseProbe[], noise: NoiseSpec, samplingRateHz: number): void {
  const lines = randomLines(noise, samplingRateHz / 2)
  if (lines.length === 0) return
  const atLines: Grid = {
    hz: Float64Array.from(lines, ({ hz }) => hz),
    masses: Float64Array.from(lines, ({ amplitudeUv }) => amplitudeUv ** 2 / 2),
    transforms: new WeakMap(),
    responses: new WeakMap(),
  }
  const spectra = probes.map((probe) => spectrumOf(probe, atLines, samplingRateHz))
  spectra.forEach((a, i) => {
    spectra.forEach((b, j) => {
      for (let k = 0; k < lines.length; k++) matrix[i][j] += atLines.masses[k] * (a.re[k] * b.re[k] + a.im[k] * b.im[k])
    })
  })
}
