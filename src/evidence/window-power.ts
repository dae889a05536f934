import { nextPowerOfTwo, realTransform } from '../filter/fourier.ts'

/** |G(f)|² of a window at any frequency. */
export type WindowPower = (hz: number) => number

/** Samples of |G|² on each side of a frequency that its interpolation takes. */
const HALF_POINTS = 6
/** Length of the transform over that of the window: |G|² then has at least 8 samples in its quickest oscillation. */
const OVERSAMPLING = 8
/** Bins below which the transform is summed directly, because |G|² may fall there by many powers of ten. */
const DIRECT_BINS = 16

/**
 * |G(f)|² of a window, G(f) = Σ g[m]·e^(−j2πfm/fs), ready to be read at any frequency from 0 to fs/2.
 *
 * G is summed directly near 0 Hz, where a window with baseline and high-pass falls by many powers of ten, and everywhere for short
 * windows. Elsewhere |G|², a trigonometric polynomial of known degree, is interpolated from a zero-padded transform of at least 8
 * times the window's length through 12 neighbours (barycentric Lagrange): to about 3e-6 for its quickest oscillation, which only
 * the window's two ends share, and far better for the slower ones.
 *
 * @param window g, finite values; leading and trailing zeros cost nothing.
 */
export function windowPower(window: Float64Array, samplingRateHz: number): WindowPower {
  let from = 0
  let to = window.length
  while (from < to && window[from] === 0) from++
  while (to > from && window[to - 1] === 0) to--
  const g = window.subarray(from, to)
  const n = g.length
  if (n === 0) return () => 0
  const size = nextPowerOfTwo(Math.max(OVERSAMPLING * n, 8 * DIRECT_BINS))
  const { re, im } = realTransform(g, size)
  const half = size / 2
  const binHz = samplingRateHz / size
  // the mirror images beyond both ends, so that every frequency has all its neighbours
  const margin = HALF_POINTS
  const power = new Float64Array(half + 1 + 2 * margin)
  for (let k = -margin; k <= half + margin; k++) {
    const bin = k < 0 ? -k : k > half ? size - k : k
    power[k + margin] = re[bin] * re[bin] + im[bin] * im[bin]
  }
  return (hz) => {
    const position = hz / binHz
    return position < DIRECT_BINS ? directPower(g, hz / samplingRateHz) : interpolate(power, position + margin)
  }
}

/** Σ of the window at one frequency (in cycles per sample), by a rotation that is set right again every 64 samples. */
export function directTransform(g: Float64Array, cyclesPerSample: number): { re: number; im: number } {
  const stepRe = Math.cos(2 * Math.PI * cyclesPerSample)
  const stepIm = Math.sin(2 * Math.PI * cyclesPerSample)
  let re = 0
  let im = 0
  for (let start = 0; start < g.length; start += 64) {
    const turns = start * cyclesPerSample
    const angle = 2 * Math.PI * (turns - Math.floor(turns))
    let c = Math.cos(angle)
    let s = Math.sin(angle)
    const end = Math.min(start + 64, g.length)
    for (let m = start; m < end; m++) {
      re += g[m] * c
      im -= g[m] * s
      const next = c * stepRe - s * stepIm
      s = c * stepIm + s * stepRe
      c = next
    }
  }
  return { re, im }
}

function directPower(g: Float64Array, cyclesPerSample: number): number {
  const { re, im } = directTransform(g, cyclesPerSample)
  return re * re + im * im
}

/** Barycentric weights of evenly spaced points: (−1)^k·binomial(11, k). */
const BARYCENTRIC = Float64Array.of(1, -11, 55, -165, 330, -462, 462, -330, 165, -55, 11, -1)

function interpolate(values: Float64Array, position: number): number {
  const first = Math.floor(position) - HALF_POINTS + 1
  let numerator = 0
  let denominator = 0
  for (let k = 0; k < 2 * HALF_POINTS; k++) {
    const distance = position - first - k
    if (distance === 0) return values[first + k]
    const share = BARYCENTRIC[k] / distance
    numerator += share * values[first + k]
    denominator += share
  }
  // rounding may take a value of 0 just below it
  return Math.max(0, numerator / denominator)
}
