import FFT from 'fft.js'

/**
 * Discrete Fourier transforms of any length, X[k] = Σ x[n]·e^(−j2πkn/N), the inverse with 1/N. Powers of two go through
 * fft.js, other lengths through Bluestein's chirp (IEEE Trans. Audio Electroacoust. 18, 451–455, 1970).
 */

/** Real and imaginary parts of as many complex values. */
export interface Complex {
  readonly re: Float64Array
  readonly im: Float64Array
}

/**
 * A transform of one power of two with buffers of its own, of interleaved complex values (re, im, re, im …). The buffers are shared by all
 * who ask for that size: write `input`, transform, read `output`, and keep nothing.
 */
export interface TransformPlan {
  readonly transform: (out: Float64Array, data: Float64Array) => void
  /** With the factor 1/N. */
  readonly inverse: (out: Float64Array, data: Float64Array) => void
  readonly input: Float64Array
  readonly output: Float64Array
}

const plans = new Map<number, TransformPlan>()

/** The plan of a size, a power of two above 1; for loops that cannot afford to copy. */
export function planOf(size: number): TransformPlan {
  let plan = plans.get(size)
  if (!plan) {
    const fft = new FFT(size)
    plan = {
      transform: (out, data) => fft.transform(out, data),
      inverse: (out, data) => fft.inverseTransform(out, data),
      input: new Float64Array(2 * size),
      output: new Float64Array(2 * size),
    }
    plans.set(size, plan)
  }
  return plan
}

/** Smallest power of two that is at least n, and at least 2. */
export function nextPowerOfTwo(n: number): number {
  let size = 2
  while (size < n) size *= 2
  return size
}

/**
 * Forward transform of complex values, any length.
 *
 * @throws RangeError where the two parts differ in length or are empty.
 */
export function forwardTransform(re: Float64Array, im: Float64Array): Complex {
  return transform(re, im, false)
}

/** Inverse transform of complex values, any length, with the factor 1/N. */
export function inverseTransform(re: Float64Array, im: Float64Array): Complex {
  return transform(re, im, true)
}

/**
 * Forward transform of real values.
 *
 * @param length  transform length N ≥ x.length (x is followed by zeros); default x.length.
 * @returns  the bins 0 … floor(N/2); the others are their conjugates.
 */
export function realTransform(x: Float64Array, length = x.length): Complex {
  checkLength(length)
  if (length < x.length) throw new RangeError(`length must be at least ${x.length} (the data), was ${length}`)
  const bins = Math.floor(length / 2) + 1
  if (length % 2 === 0) {
    // even and odd samples as one complex signal of half the length
    const half = length / 2
    const even = new Float64Array(half)
    const odd = new Float64Array(half)
    for (let i = 0; 2 * i < x.length; i++) {
      even[i] = x[2 * i]
      if (2 * i + 1 < x.length) odd[i] = x[2 * i + 1]
    }
    const packed = transform(even, odd, false)
    const re = new Float64Array(bins)
    const im = new Float64Array(bins)
    for (let k = 0; k < bins; k++) {
      const a = k % half
      const b = (half - k) % half
      const evenRe = (packed.re[a] + packed.re[b]) / 2
      const evenIm = (packed.im[a] - packed.im[b]) / 2
      const oddRe = (packed.im[a] + packed.im[b]) / 2
      const oddIm = (packed.re[b] - packed.re[a]) / 2
      const angle = (-2 * Math.PI * k) / length
      const turnRe = Math.cos(angle)
      const turnIm = Math.sin(angle)
      re[k] = evenRe + turnRe * oddRe - turnIm * oddIm
      im[k] = evenIm + turnRe * oddIm + turnIm * oddRe
    }
    im[0] = 0
    im[half] = 0
    return { re, im }
  }
  const padded = new Float64Array(length)
  padded.set(x)
  const full = transform(padded, new Float64Array(length), false)
  full.im[0] = 0
  return { re: full.re.slice(0, bins), im: full.im.slice(0, bins) }
}

/**
 * Real values from the bins 0 … floor(length/2) of their transform; inverse of `realTransform`.
 *
 * @param length  number of values; needed because two lengths have the same number of bins.
 * @throws RangeError where the number of bins does not belong to the length.
 */
export function inverseRealTransform(re: Float64Array, im: Float64Array, length: number): Float64Array {
  checkLength(length)
  const bins = Math.floor(length / 2) + 1
  if (re.length !== bins || im.length !== bins) {
    throw new RangeError(`a transform of ${length} real values has ${bins} bins, was ${re.length} and ${im.length}`)
  }
  const fullRe = new Float64Array(length)
  const fullIm = new Float64Array(length)
  fullRe.set(re)
  fullIm.set(im)
  for (let k = 1; 2 * k < length; k++) {
    fullRe[length - k] = re[k]
    fullIm[length - k] = -im[k]
  }
  return transform(fullRe, fullIm, true).re
}

/**
 * Linear convolution of two signals through one complex transform.
 *
 * @returns  a.length + b.length − 1 values; empty where one of them is.
 */
export function convolve(a: Float64Array, b: Float64Array): Float64Array {
  if (a.length === 0 || b.length === 0) return new Float64Array(0)
  const length = a.length + b.length - 1
  const size = nextPowerOfTwo(length)
  const { transform, inverse, input, output } = planOf(size)
  input.fill(0)
  for (let i = 0; i < a.length; i++) input[2 * i] = a[i]
  for (let i = 0; i < b.length; i++) input[2 * i + 1] = b[i]
  transform(output, input)
  // with z = a + jb, A·B = (Z[k]² − conj(Z[−k])²)/(4j)
  for (let k = 0; k < size; k++) {
    const l = (size - k) % size
    const re = output[2 * k]
    const im = output[2 * k + 1]
    const mirrorRe = output[2 * l]
    const mirrorIm = -output[2 * l + 1]
    const squareRe = re * re - im * im - (mirrorRe * mirrorRe - mirrorIm * mirrorIm)
    const squareIm = 2 * re * im - 2 * mirrorRe * mirrorIm
    input[2 * k] = squareIm / 4
    input[2 * k + 1] = -squareRe / 4
  }
  inverse(output, input)
  const result = new Float64Array(length)
  for (let i = 0; i < length; i++) result[i] = output[2 * i]
  return result
}

function checkLength(length: number): void {
  if (!Number.isInteger(length) || length < 1) {
    throw new RangeError(`the length of a transform must be a positive whole number, was ${length}`)
  }
}

function transform(re: Float64Array, im: Float64Array, inverse: boolean): Complex {
  const length = re.length
  checkLength(length)
  if (im.length !== length) {
    throw new RangeError(`real and imaginary parts must be equally long, were ${length} and ${im.length}`)
  }
  if (length === 1) return { re: re.slice(), im: im.slice() }
  if ((length & (length - 1)) !== 0) return chirpTransform(re, im, inverse)
  const plan = planOf(length)
  for (let i = 0; i < length; i++) {
    plan.input[2 * i] = re[i]
    plan.input[2 * i + 1] = im[i]
  }
  if (inverse) plan.inverse(plan.output, plan.input)
  else plan.transform(plan.output, plan.input)
  return split(plan.output, length)
}

function split(interleaved: Float64Array, length: number): Complex {
  const re = new Float64Array(length)
  const im = new Float64Array(length)
  for (let i = 0; i < length; i++) {
    re[i] = interleaved[2 * i]
    im[i] = interleaved[2 * i + 1]
  }
  return { re, im }
}

/** Bluestein: kn = (k² + n² − (k − n)²)/2 turns the transform into a convolution with a chirp. */
function chirpTransform(re: Float64Array, im: Float64Array, inverse: boolean): Complex {
  const length = re.length
  const size = nextPowerOfTwo(2 * length - 1)
  const { transform, inverse: back, input, output } = planOf(size)
  const sign = inverse ? 1 : -1
  const chirpRe = new Float64Array(length)
  const chirpIm = new Float64Array(length)
  for (let n = 0; n < length; n++) {
    // n² modulo 2N keeps the angle exact for long signals
    const angle = (sign * Math.PI * ((n * n) % (2 * length))) / length
    chirpRe[n] = Math.cos(angle)
    chirpIm[n] = Math.sin(angle)
  }
  input.fill(0)
  for (let n = 0; n < length; n++) {
    input[2 * n] = chirpRe[n]
    input[2 * n + 1] = -chirpIm[n]
    if (n > 0) {
      input[2 * (size - n)] = chirpRe[n]
      input[2 * (size - n) + 1] = -chirpIm[n]
    }
  }
  transform(output, input)
  const kernel = output.slice()
  input.fill(0)
  for (let n = 0; n < length; n++) {
    input[2 * n] = re[n] * chirpRe[n] - im[n] * chirpIm[n]
    input[2 * n + 1] = re[n] * chirpIm[n] + im[n] * chirpRe[n]
  }
  transform(output, input)
  for (let k = 0; k < 2 * size; k += 2) {
    input[k] = output[k] * kernel[k] - output[k + 1] * kernel[k + 1]
    input[k + 1] = output[k] * kernel[k + 1] + output[k + 1] * kernel[k]
  }
  back(output, input)
  const result = { re: new Float64Array(length), im: new Float64Array(length) }
  const scale = inverse ? 1 / length : 1
  for (let k = 0; k < length; k++) {
    result.re[k] = (output[2 * k] * chirpRe[k] - output[2 * k + 1] * chirpIm[k]) * scale
    result.im[k] = (output[2 * k] * chirpIm[k] + output[2 * k + 1] * chirpRe[k]) * scale
  }
  return result
}
