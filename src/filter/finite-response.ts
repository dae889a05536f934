import { nextPowerOfTwo, planOf } from './fourier.ts'

/**
 * Full linear convolution with the taps of a FIR stage: direct where one side is short, else block by block through the
 * Fourier transform (overlap–add). Two blocks travel as real and imaginary part of one complex transform, which a real
 * kernel keeps apart.
 *
 * Source: overlap–add, Stockham 1966; Oppenheim & Schafer, Discrete-Time Signal Processing, ch. 8.
 */

/** Below so many multiplications per sample the direct sum is the faster one (measured). */
const DIRECT_TAPS = 50

/**
 * @returns  x.length + taps.length − 1 values, exactly 0 where only leading or trailing zeros of x can reach; empty where
 *           x is.
 */
export function convolveTaps(x: Float64Array, taps: Float64Array): Float64Array {
  if (x.length === 0) return new Float64Array(0)
  const result = new Float64Array(x.length + taps.length - 1)
  const { from, to } = support(x)
  if (to - from <= DIRECT_TAPS || taps.length <= DIRECT_TAPS) addDirect(x, from, to, taps, result)
  else addBlocks(x, from, to, taps, result)
  return result
}

/** Range of the samples that are not zero: from ≤ index < to; both 0 where there is none. */
export function support(x: Float64Array): { from: number; to: number } {
  let from = 0
  let to = x.length
  while (from < to && x[from] === 0) from++
  while (to > from && x[to - 1] === 0) to--
  return from === to ? { from: 0, to: 0 } : { from, to }
}

function addDirect(x: Float64Array, from: number, to: number, taps: Float64Array, result: Float64Array): void {
  // the shorter of the two in the outer loop
  if (to - from < taps.length) {
    for (let i = from; i < to; i++) {
      const value = x[i]
      for (let k = 0; k < taps.length; k++) result[i + k] += value * taps[k]
    }
  } else {
    for (let k = 0; k < taps.length; k++) {
      const tap = taps[k]
      for (let i = from; i < to; i++) result[i + k] += tap * x[i]
    }
  }
}

function addBlocks(x: Float64Array, from: number, to: number, taps: Float64Array, result: Float64Array): void {
  const size = transformSize(to - from, taps.length)
  const block = size - taps.length + 1
  const kernel = kernelSpectrum(taps, size)
  const { transform, inverse, input, output } = planOf(size)
  for (let first = from; first < to; first += 2 * block) {
    const second = Math.min(first + block, to)
    const end = Math.min(second + block, to)
    const [firstLength, secondLength] = [second - first, end - second]
    input.fill(0)
    for (let i = 0; i < firstLength; i++) input[2 * i] = x[first + i]
    for (let i = 0; i < secondLength; i++) input[2 * i + 1] = x[second + i]
    transform(output, input)
    for (let k = 0; k < 2 * size; k += 2) {
      const a = output[k]
      const b = output[k + 1]
      input[k] = a * kernel[k] - b * kernel[k + 1]
      input[k + 1] = a * kernel[k + 1] + b * kernel[k]
    }
    inverse(output, input)
    const length = firstLength + taps.length - 1
    for (let i = 0; i < length; i++) result[first + i] += output[2 * i]
    if (secondLength > 0) {
      const rest = secondLength + taps.length - 1
      for (let i = 0; i < rest; i++) result[second + i] += output[2 * i + 1]
    }
  }
}

/** The power of two with the fewest operations, N·log N per pair of blocks. */
function transformSize(samples: number, taps: number): number {
  let best = 0
  let bestCost = Infinity
  const largest = nextPowerOfTwo(samples + taps - 1)
  for (let size = nextPowerOfTwo(taps + 1); size <= largest; size *= 2) {
    const pairs = Math.ceil(samples / (2 * (size - taps + 1)))
    const cost = pairs * size * Math.log2(size)
    if (cost < bestCost) {
      best = size
      bestCost = cost
    }
  }
  return best
}

/** One spectrum (interleaved) is kept for each kernel, that of the transform size used last; it goes with the taps. */
const spectra = new WeakMap<Float64Array, Float64Array>()

function kernelSpectrum(taps: Float64Array, size: number): Float64Array {
  const kept = spectra.get(taps)
  if (kept?.length === 2 * size) return kept
  const { transform, input } = planOf(size)
  const spectrum = new Float64Array(2 * size)
  input.fill(0)
  for (let i = 0; i < taps.length; i++) input[2 * i] = taps[i]
  transform(spectrum, input)
  spectra.set(taps, spectrum)
  return spectrum
}
