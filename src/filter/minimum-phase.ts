import { forwardTransform, inverseTransform, nextPowerOfTwo, realTransform } from './fourier.ts'
import { specError } from './spec-error.ts'

/**
 * Decays of the circle's powers over one transform, in the order tried: e^−decay is what folds over, its square root what the
 * exponential leaves out. With transforms of 2^16 and more every circle lies within radius 1.001.
 */
const DECAYS = [40, 52, 30, 60, 35, 46, 26]

/** Largest difference of amplitude with which a circle is kept at once, and with which any is kept, over the largest gain. */
const GOOD = 1e-6
const ENOUGH = 5e-6

/**
 * Minimum-phase form of a symmetric kernel: the same number of taps and the same amplitude response, every zero outside the unit
 * circle reflected into it.
 *
 * Homomorphic, but on a circle a little outside the unit circle, where a stop band has no zeros: there the logarithm
 * is smooth and the transform short. Zeros on the unit circle stay where they are, and no floor is needed. The logarithm's
 * derivative zH′/H takes the place of an unwrapped phase: its causal half holds the power sums of the zeros inside, its
 * anticausal half those of the reflected zeros outside; their sum is the minimum-phase cepstrum.
 *
 * @param taps      symmetric kernel, an odd number of taps.
 * @param zeroAtDc  true for a high-pass or band-pass, whose sum is then made 0; else the sum stays what it is.
 * @returns  as many taps. Amplitude within 1e-5 of the kernel's, no zero beyond radius 1.001.
 * @throws RangeError where rounding does not allow that (Kaiser attenuations far above 100 dB).
 * @see Oppenheim & Schafer, Discrete-Time Signal Processing, chapter on the complex cepstrum.
 */
export function minimumPhase(taps: Float64Array, zeroAtDc: boolean): Float64Array {
  let best = taps
  let bestMiss = Infinity
  // a zero too close to one circle is clear of another; the amplitude tells
  for (const decay of DECAYS) {
    const candidate = throughCepstrum(taps, zeroAtDc, decay)
    const miss = largestDifference(taps, candidate)
    if (miss < bestMiss) {
      best = candidate
      bestMiss = miss
    }
    if (miss < GOOD) break
  }
  if (!(bestMiss < ENOUGH)) {
    throw specError('delay', 'minimum-phase is not possible here: the stop band is too deep for double precision')
  }
  return best
}

function throughCepstrum(taps: Float64Array, zeroAtDc: boolean, decay: number): Float64Array {
  const length = taps.length
  const size = nextPowerOfTwo(Math.max(2 ** 16, 16 * length))
  const step = decay / size
  const spectrum = onCircle(taps, step, size)
  const derivative = inverseTransform(spectrum.re, spectrum.im).re

  // power sums of the zeros, times e^(−step·n): the causal half, and the anticausal half brought to the same circle
  const half = size / 2
  const cepstrumRe = new Float64Array(size)
  for (let n = 1; n < half; n++) {
    const outside = -derivative[size - n] * Math.exp(-2 * step * n)
    cepstrumRe[n] = -(derivative[n] + outside) / n
  }
  const log = forwardTransform(cepstrumRe, new Float64Array(size))
  for (let k = 0; k < size; k++) {
    const amplitude = Math.exp(log.re[k])
    log.re[k] = amplitude * Math.cos(log.im[k])
    log.im[k] = amplitude * Math.sin(log.im[k])
  }
  const damped = inverseTransform(log.re, log.im).re

  const result = new Float64Array(length)
  let energy = 0
  let wanted = 0
  let sum = 0
  let prototypeSum = 0
  for (let n = 0; n < length; n++) {
    result[n] = damped[n] * Math.exp(step * n)
    energy += result[n] ** 2
    wanted += taps[n] ** 2
    sum += result[n]
    prototypeSum += taps[n]
  }
  // equal amplitude means equal energy; where there is a gain at 0 Hz, that is kept instead
  const scale = zeroAtDc ? Math.sqrt(wanted / energy) : prototypeSum / sum
  for (let n = 0; n < length; n++) result[n] *= scale
  return zeroAtDc ? withoutSum(result) : result
}

/** Takes the sum out of the taps, each in proportion to its size. */
function withoutSum(taps: Float64Array): Float64Array {
  let sum = 0
  let absolute = 0
  for (const tap of taps) {
    sum += tap
    absolute += Math.abs(tap)
  }
  return taps.map((tap) => tap - (Math.abs(tap) * sum) / absolute)
}

/** Largest difference between two kernels' amplitude responses over the largest gain, on a grid of 4 points a lobe. */
function largestDifference(a: Float64Array, b: Float64Array): number {
  const size = nextPowerOfTwo(4 * a.length)
  const spectrumA = realTransform(a, size)
  const spectrumB = realTransform(b, size)
  let difference = 0
  let largest = 0
  for (let k = 0; k < spectrumA.re.length; k++) {
    const gainA = Math.sqrt(spectrumA.re[k] ** 2 + spectrumA.im[k] ** 2)
    const gainB = Math.sqrt(spectrumB.re[k] ** 2 + spectrumB.im[k] ** 2)
    // written so that a NaN counts as a difference
    if (!(Math.abs(gainA - gainB) <= difference)) difference = Math.abs(gainA - gainB)
    if (gainA > largest) largest = gainA
  }
  return difference / largest
}

/**
 * zH′/H + m, that is Σ(m − k)·h[k]z⁻ᵏ / Σh[k]z⁻ᵏ with m the middle tap, at `size` points of the circle of radius e^step; both
 * sums in one transform. The constant m changes the mean alone, and spares the rounding of the largest tap.
 */
function onCircle(taps: Float64Array, step: number, size: number): { re: Float64Array; im: Float64Array } {
  const plain = new Float64Array(size)
  const weighted = new Float64Array(size)
  const middle = (taps.length - 1) / 2
  for (let k = 0; k < taps.length; k++) {
    plain[k] = taps[k] * Math.exp(-step * k)
    weighted[k] = (middle - k) * plain[k]
  }
  const packed = forwardTransform(plain, weighted)
  const re = new Float64Array(size)
  const im = new Float64Array(size)
  for (let k = 0; k <= size / 2; k++) {
    const l = (size - k) % size
    const hRe = (packed.re[k] + packed.re[l]) / 2
    const hIm = (packed.im[k] - packed.im[l]) / 2
    const dRe = (packed.im[k] + packed.im[l]) / 2
    const dIm = (packed.re[l] - packed.re[k]) / 2
    const square = hRe * hRe + hIm * hIm
    re[k] = (dRe * hRe + dIm * hIm) / square
    im[k] = (dIm * hRe - dRe * hIm) / square
    re[l] = re[k]
    im[l] = -im[k]
  }
  return { re, im }
}
