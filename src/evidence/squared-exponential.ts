/**
 * Late activity: a zero-mean Gaussian process with the squared-exponential covariance σ²·exp(−(t − u)²/(2ℓ²)) from its onset on, and
 * exactly zero before. It is written as a sum of Gaussians, x(t) = Σ u_j·φ(t − c_j), with independent standard normal u_j,
 * φ(t) = σ·(2δ²/(πℓ²))^¼·exp(−t²/ℓ²) and centres c_j every δ: the covariance of the sum is the squared exponential times
 * 1 + 2·exp(−π²ℓ²/(2δ²))·cos(…), so that a step of at most 0.55 ℓ leaves an error below 2e-7 of σ².
 *
 * @see Rasmussen & Williams, Gaussian Processes for Machine Learning, 2006, ch. 4.2.1 (the process as a sum of Gaussians).
 */
export interface GaussianSum {
  readonly sigmaUv: number
  /** ℓ, in samples. */
  readonly lengthSamples: number
  /** δ, in samples: a whole number, or one over a whole number. */
  readonly stepSamples: number
  /** φ(0). */
  readonly peakUv: number
  /** Where φ is taken as 0: it is below 1e-7 of its peak. */
  readonly halfWidthSamples: number
}

const WIDEST_STEP = 0.55
const HALF_WIDTH = 4

/** @throws RangeError for a σ or ℓ that is not positive and finite. */
export function gaussianSum(sigmaUv: number, lengthSamples: number): GaussianSum {
  if (!(sigmaUv > 0) || !Number.isFinite(sigmaUv)) {
    throw new RangeError(`sigmaUv must be positive and finite, was ${sigmaUv}`)
  }
  if (!(lengthSamples > 0) || !Number.isFinite(lengthSamples)) {
    throw new RangeError(`the correlation length must be positive and finite, was ${lengthSamples} samples`)
  }
  const widest = WIDEST_STEP * lengthSamples
  const stepSamples = widest >= 1 ? Math.floor(widest) : 1 / Math.ceil(1 / widest)
  return {
    sigmaUv,
    lengthSamples,
    stepSamples,
    peakUv: sigmaUv * ((2 * stepSamples ** 2) / (Math.PI * lengthSamples ** 2)) ** 0.25,
    halfWidthSamples: Math.ceil(HALF_WIDTH * lengthSamples),
  }
}

/** φ around a centre at samples from … to − 1. */
export function gaussianOn(
  { peakUv, lengthSamples }: GaussianSum,
  centre: number,
  from: number,
  to: number,
): Float64Array {
  const values = new Float64Array(Math.max(0, to - from))
  for (let i = 0; i < values.length; i++) {
    const z = (from + i - centre) / lengthSamples
    values[i] = peakUv * Math.exp(-z * z)
  }
  return values
}

/** The centres whose Gaussians reach the samples from … to − 1, ascending. */
export function centresFor({ stepSamples, halfWidthSamples }: GaussianSum, from: number, to: number): Float64Array {
  const first = Math.ceil((from - halfWidthSamples) / stepSamples)
  const last = Math.floor((to - 1 + halfWidthSamples) / stepSamples)
  return Float64Array.from({ length: Math.max(0, last - first + 1) }, (_, j) => (first + j) * stepSamples)
}
