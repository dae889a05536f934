import { forwardTransform, nextPowerOfTwo, realTransform } from '../filter/fourier.ts'
import { noiseAutocovariance, noiseSpectrum, type NoiseSpectrum } from './noise-autocovariance.ts'
import type { NoiseSpec } from './noise.ts'
import type { SeededRandom } from './seeded-random.ts'

/** A noise made ready to be drawn on a stretch of samples; keep it, since a draw costs far less than making it. */
export interface NoiseSource {
  readonly samples: number
  readonly samplingRateHz: number
  /** √(eigenvalue / size) of the circulant matrix that holds the stretch's covariance. */
  readonly scale: Float64Array
  readonly lines: readonly { readonly hz: number; readonly amplitudeUv: number }[]
}

const LARGEST_CIRCULANT = 2 ** 18
/** Largest error of the covariance that is let pass by default, as a part of how far the covariance falls over the stretch. */
const TOLERANCE = 1e-5

/**
 * Gaussian noise of a given density on n samples by circulant embedding (Davies & Harte, Biometrika 74, 95–101, 1987; Dietrich &
 * Newsam, SIAM J. Sci. Comput. 18, 1088–1107, 1997): exact for every pair of samples, whatever lies below the stretch's own
 * lowest frequency.
 *
 * Negative eigenvalues are taken as 0; the circulant is doubled until that leaves the covariance right to 1e-5 (`tolerance`) of how far it falls
 * over the stretch (a steady level, which it also holds, is taken off by any baseline).
 *
 * @throws RangeError for a bad noise or rate, fewer than 2 or more than 131 072 samples, or a noise so steep that it cannot be
 *   embedded.
 */
export function noiseSource(
  noise: NoiseSpec | NoiseSpectrum,
  samplingRateHz: number,
  samples: number,
  tolerance = TOLERANCE,
): NoiseSource {
  if (!Number.isInteger(samples) || samples < 2 || samples > LARGEST_CIRCULANT / 2) {
    throw new RangeError(`samples must be a whole number from 2 to ${LARGEST_CIRCULANT / 2}, was ${samples}`)
  }
  const spectrum = 'kind' in noise ? noiseSpectrum(noise) : noise
  const lines = spectrum.lines.filter(({ hz }) => hz < samplingRateHz / 2)
  for (let size = nextPowerOfTwo(Math.max(32, 2 * samples)); ; size *= 2) {
    const covariance = noiseAutocovariance(spectrum, samplingRateHz, size / 2 + 1, tolerance > 1e-4 ? 8 : 32)
    const eigenvalues = circulantEigenvalues(covariance, size)
    let clipped = 0
    for (let k = 0; k < eigenvalues.length; k++) {
      if (eigenvalues[k] >= 0) continue
      clipped -= (k === 0 || k === size / 2 ? 1 : 2) * eigenvalues[k]
      eigenvalues[k] = 0
    }
    // no covariance is off by more than the mean of what was clipped
    let fall = 0
    for (let k = 1; k < samples; k++) fall = Math.max(fall, covariance[0] - covariance[k])
    const passes = clipped / size <= tolerance * fall
    if (passes || size >= LARGEST_CIRCULANT) {
      if (!passes) {
        throw new RangeError(
          `the noise must be less steep to be simulated on ${samples} samples at ${samplingRateHz} Hz: its covariance would be off by ${clipped / size} µV²`,
        )
      }
      const scale = new Float64Array(size)
      for (let k = 0; k < size; k++) scale[k] = Math.sqrt(eigenvalues[k <= size / 2 ? k : size - k] / size)
      return { samples, samplingRateHz, scale, lines }
    }
  }
}

/**
 * Two independent averages of noise over N trials each: the Gaussian part of an average is Gaussian with 1/N of the variance;
 * a line has its own random phase in every trial.
 *
 * @param trials N ≥ 1; need not be whole for a difference's 1/(1/N₁ + 1/N₂), where lines are then summed over the nearest count.
 * @param outputs where the two go, of `samples` values each; new arrays where absent.
 * @throws RangeError for N below 1 or outputs of another length.
 */
export function drawNoise(
  source: NoiseSource,
  random: SeededRandom,
  trials = 1,
  outputs: readonly [Float64Array, Float64Array] = [new Float64Array(source.samples), new Float64Array(source.samples)],
): readonly [Float64Array, Float64Array] {
  if (!(trials >= 1) || !Number.isFinite(trials)) throw new RangeError(`trials must be at least 1, was ${trials}`)
  const { scale, samples } = source
  const size = scale.length
  const amplitude = 1 / Math.sqrt(trials)
  const re = new Float64Array(size)
  const im = new Float64Array(size)
  for (let k = 0; k < size; k++) {
    re[k] = amplitude * scale[k] * random.normal()
    im[k] = amplitude * scale[k] * random.normal()
  }
  const drawn = forwardTransform(re, im)
  outputs.forEach((output, i) => {
    if (output.length !== samples) throw new RangeError(`outputs must hold ${samples} samples, had ${output.length}`)
    output.set((i === 0 ? drawn.re : drawn.im).subarray(0, samples))
    for (const line of source.lines) addLine(output, line, source.samplingRateHz, trials, random)
  })
  return outputs
}

function addLine(
  output: Float64Array,
  { hz, amplitudeUv }: { hz: number; amplitudeUv: number },
  samplingRateHz: number,
  trials: number,
  random: SeededRandom,
): void {
  const count = Math.max(1, Math.round(trials))
  let re = 0
  let im = 0
  for (let trial = 0; trial < count; trial++) {
    const phase = 2 * Math.PI * random.uniform()
    re += Math.cos(phase)
    im += Math.sin(phase)
  }
  // the sum of N phases, scaled to the variance of N that is not whole
  const scale = amplitudeUv / Math.sqrt(count * trials)
  const turn = (2 * Math.PI * hz) / samplingRateHz
  for (let i = 0; i < output.length; i++) output[i] += scale * (re * Math.cos(turn * i) - im * Math.sin(turn * i))
}

function circulantEigenvalues(covariance: Float64Array, size: number): Float64Array {
  const row = new Float64Array(size)
  for (let k = 0; k <= size / 2; k++) {
    row[k] = covariance[k]
    if (k > 0) row[size - k] = covariance[k]
  }
  return realTransform(row, size).re.slice()
}
