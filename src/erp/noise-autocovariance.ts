import { inverseRealTransform, nextPowerOfTwo } from '../filter/fourier.ts'
import { noiseDensity, noiseKinksHz, noiseLines, type NoiseSpec } from './noise.ts'

/**
 * A noise ready to be integrated: what is white apart, since it needs no integral, and where the rest changes quickly. Random lines
 * are kept apart too; lines locked to the event are no noise.
 */
export interface NoiseSpectrum {
  readonly whiteUv2PerHz: number
  /** The rest of the one-sided density at given frequencies, µV²/Hz. */
  readonly density: (frequenciesHz: Float64Array) => Float64Array
  /** Where the density has a kink, or changes within less than an octave. */
  readonly breaksHz: readonly number[]
  readonly lines: readonly { readonly hz: number; readonly amplitudeUv: number }[]
}

/** @throws RangeError for a noise that `checkNoise` refuses. */
export function noiseSpectrum(noise: NoiseSpec): NoiseSpectrum {
  const breaksHz = noiseKinksHz(noise)
  if (noise.kind === 'model' && noise.alpha) {
    for (let k = -8; k <= 8; k++) breaksHz.push(noise.alpha.centreHz + k * noise.alpha.sdHz)
  }
  const whiteUv2PerHz = noise.kind === 'model' ? noise.whiteUv2PerHz : 0
  const coloured = noise.kind === 'model' ? { ...noise, whiteUv2PerHz: 0 } : noise
  noiseDensity(noise, new Float64Array(1))
  return {
    whiteUv2PerHz,
    density: (hz) => noiseDensity(coloured, hz),
    breaksHz,
    lines: noiseLines(noise)
      .filter((line) => !line.locked)
      .map(({ hz, amplitudeUv }) => ({ hz, amplitudeUv })),
  }
}

/** Longest transform. */
const LARGEST_SIZE = 2 ** 20
/** Lowest limit of the octave-wide panels. */
const LOWEST_HZ = 1e-5
/** Oscillations of the longest lag that are integrated panel by panel, because S may fall there by many powers of ten. */
const SLOW_TURNS = 4

/**
 * Autocovariance of a noise without its lines, C[k] = ∫₀^{fs/2} S(f)·cos(2πfk/fs) df, in µV².
 *
 * Slow frequencies, up to four oscillations of the longest lag, by Fejér panels; the others by one Fourier transform of S averaged
 * with the hat functions of a grid. The hats multiply C by sinc²(πk/L), which is divided out again, and the images of C
 * that a grid brings from lags L, 2L … by next to nothing; for the smooth densities of EEG the error is below 1e-8 of C[0].
 *
 * @param lags          how many; k from 0 to lags − 1.
 * @param oversampling  L in multiples of the lags; 8 is right to 1e-5, quicker.
 * @throws RangeError for a sampling rate or a number of lags that is not positive, or more than 2¹⁸ lags.
 */
export function noiseAutocovariance(
  spectrum: NoiseSpectrum,
  samplingRateHz: number,
  lags: number,
  oversampling: 8 | 32 = 32,
): Float64Array {
  if (!(samplingRateHz > 0) || !Number.isFinite(samplingRateHz)) {
    throw new RangeError(`samplingRateHz must be positive and finite, was ${samplingRateHz}`)
  }
  if (!Number.isInteger(lags) || lags < 1 || lags > LARGEST_SIZE / 4) {
    throw new RangeError(`lags must be a whole number from 1 to ${LARGEST_SIZE / 4}, was ${lags}`)
  }
  const nyquist = samplingRateHz / 2
  const size = Math.min(LARGEST_SIZE, nextPowerOfTwo(Math.max(4096, oversampling * lags)))
  const stepHz = samplingRateHz / size
  const half = size / 2
  const first = Math.min(half, Math.max(32, Math.ceil((SLOW_TURNS * size) / Math.max(1, lags - 1))))
  const breaks = spectrum.breaksHz.filter((hz) => hz > 0 && hz < nyquist).sort((a, b) => a - b)

  const covariance = slowPart(spectrum, breaks, first * stepHz, samplingRateHz, lags)
  covariance[0] += spectrum.whiteUv2PerHz * nyquist
  if (first === half) return covariance

  const masses = hatMasses(spectrum, breaks, stepHz, first, half)
  for (let k = 1; k < half; k++) masses[k] *= half
  masses[0] *= size
  masses[half] *= size
  const fast = inverseRealTransform(masses, new Float64Array(half + 1), size)
  for (let k = 0; k < lags; k++) {
    const x = (Math.PI * k) / size
    const sinc = k === 0 ? 1 : Math.sin(x) / x
    covariance[k] += fast[k] / (sinc * sinc)
  }
  return covariance
}

function slowPart(
  { density }: NoiseSpectrum,
  breaks: readonly number[],
  toHz: number,
  samplingRateHz: number,
  lags: number,
): Float64Array {
  const limits = [0]
  for (let hz = LOWEST_HZ; hz < toHz; hz *= 2) limits.push(hz)
  limits.push(...breaks.filter((hz) => hz < toHz), toHz)
  limits.sort((a, b) => a - b)
  const widestHz = samplingRateHz / (2 * lags)
  const nodes: number[] = []
  const weights: number[] = []
  for (let p = 0; p + 1 < limits.length; p++) {
    const pieces = Math.ceil((limits[p + 1] - limits[p]) / widestHz)
    const width = (limits[p + 1] - limits[p]) / pieces
    for (let piece = 0; piece < pieces; piece++) {
      for (let i = 0; i < RULE.nodes.length; i++) {
        nodes.push(limits[p] + (piece + RULE.nodes[i]) * width)
        weights.push(RULE.weights[i] * width)
      }
    }
  }
  const hz = Float64Array.from(nodes)
  const values = density(hz)
  const covariance = new Float64Array(lags)
  for (let i = 0; i < hz.length; i++) {
    const mass = weights[i] * values[i]
    if (mass === 0) continue
    const turn = (2 * Math.PI * hz[i]) / samplingRateHz
    const stepRe = Math.cos(turn)
    const stepIm = Math.sin(turn)
    for (let start = 0; start < lags; start += 256) {
      // the rotation is set right again now and then
      let re = mass * Math.cos(turn * start)
      let im = mass * Math.sin(turn * start)
      const end = Math.min(lags, start + 256)
      for (let k = start; k < end; k++) {
        covariance[k] += re
        const next = re * stepRe - im * stepIm
        im = re * stepIm + im * stepRe
        re = next
      }
    }
  }
  return covariance
}

/** ∫ S·hat_k df for the hats of the grid's frequencies from `first` up, S taken from first·stepHz to half·stepHz only. */
function hatMasses(
  { density }: NoiseSpectrum,
  breaks: readonly number[],
  stepHz: number,
  first: number,
  half: number,
): Float64Array {
  const rough = new Uint8Array(half + 2)
  for (let b = 0; b < breaks.length; b++) {
    const cell = Math.floor(breaks[b] / stepHz)
    // breaks that lie close together mark a stretch that is rough throughout
    const near = b + 1 < breaks.length && breaks[b + 1] - breaks[b] < 8 * stepHz ? breaks[b + 1] : breaks[b]
    rough.fill(1, Math.max(0, cell - 1), Math.min(half + 2, Math.floor(near / stepHz) + 2))
  }
  const masses = new Float64Array(half + 1)
  const grid = density(Float64Array.from({ length: half - first + 1 }, (_, i) => (first + i) * stepHz))
  const nodes: number[] = []
  const shares: number[] = []
  const targets: number[] = []
  const integrate = (cell: number, k: number) => {
    const inside = breaks.filter((hz) => hz > cell * stepHz && hz < (cell + 1) * stepHz).map((hz) => hz / stepHz - cell)
    const limits = [0, ...inside, 1]
    for (let p = 0; p + 1 < limits.length; p++) {
      const width = limits[p + 1] - limits[p]
      for (let i = 0; i < RULE.nodes.length; i++) {
        const place = limits[p] + width * RULE.nodes[i]
        nodes.push((cell + place) * stepHz)
        shares.push(RULE.weights[i] * width * stepHz * (k === cell ? 1 - place : place))
        targets.push(k)
      }
    }
  }
  for (let k = first; k <= half; k++) {
    if (k > first && k < half && rough[k - 1] === 0 && rough[k] === 0) {
      // the hat's integral over a parabola through three values
      masses[k] = (stepHz * (grid[k - first - 1] + 10 * grid[k - first] + grid[k - first + 1])) / 12
      continue
    }
    if (k > first) integrate(k - 1, k)
    if (k < half) integrate(k, k)
  }
  const values = density(Float64Array.from(nodes))
  for (let i = 0; i < values.length; i++) masses[targets[i]] += shares[i] * values[i]
  return masses
}

/** Fejér's first rule on 0…1 (Mathematische Zeitschrift 37, 287–309, 1933): weights in closed form, exact to degree 15. */
const RULE = fejer(16)

function fejer(count: number): { nodes: number[]; weights: number[] } {
  const nodes: number[] = []
  const weights: number[] = []
  for (let i = 0; i < count; i++) {
    const angle = ((2 * i + 1) * Math.PI) / (2 * count)
    let sum = 1
    for (let j = 1; 2 * j < count; j++) sum -= (2 * Math.cos(2 * j * angle)) / (4 * j * j - 1)
    // the last term of an even count is a node of its cosine, and vanishes
    nodes.push((1 - Math.cos(angle)) / 2)
    weights.push(sum / count)
  }
  return { nodes, weights }
}
