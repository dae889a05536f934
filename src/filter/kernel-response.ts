/**
 * Response of a kernel: sums of taps times cosines and sines. Reinsch's form of Clenshaw's recurrence carries differences of
 * neighbouring partial sums, which keeps the sums' precision close to 0 Hz and to half the sampling rate, where the plain
 * recurrence loses it (Stoer & Bulirsch, Introduction to Numerical Analysis, ch. 2, from memory).
 */

/** Whether a kernel is equal to its reverse, tap by tap, and has a middle tap. */
export function isSymmetric(taps: Float64Array): boolean {
  if (taps.length % 2 === 0) return false
  for (let i = 0, j = taps.length - 1; i < j; i++, j--) if (taps[i] !== taps[j]) return false
  return true
}

/**
 * Amplitude of a symmetric kernel with an odd number of taps: real, negative where it turns the sign.
 *
 * @returns  Σ taps[k]·cos(2π(k − middle)f/fs) at each frequency.
 */
export function symmetricAmplitude(
  taps: Float64Array,
  frequenciesHz: Float64Array,
  samplingRateHz: number,
): Float64Array {
  const middle = (taps.length - 1) / 2
  const amplitude = new Float64Array(frequenciesHz.length)
  const scale = Math.PI / samplingRateHz
  // four frequencies at a time: one recurrence waits for its own last step
  const groups = frequenciesHz.length - (frequenciesHz.length % 4)
  const sign = new Float64Array(4)
  const delta = new Float64Array(4)
  for (let i = 0; i < groups; i += 4) {
    for (let l = 0; l < 4; l++) {
      const half = frequenciesHz[i + l] * scale
      const sine = Math.sin(half)
      const cosine = Math.cos(half)
      sign[l] = sine * sine <= cosine * cosine ? 1 : -1
      delta[l] = sign[l] > 0 ? -4 * sine * sine : 4 * cosine * cosine
    }
    const [s0, s1, s2, s3] = sign
    const [q0, q1, q2, q3] = delta
    let d0 = 0
    let d1 = 0
    let d2 = 0
    let d3 = 0
    let u0 = 0
    let u1 = 0
    let u2 = 0
    let u3 = 0
    for (let k = 2 * middle; k > middle; k--) {
      const tap = taps[k]
      d0 = tap + q0 * u0 + s0 * d0
      d1 = tap + q1 * u1 + s1 * d1
      d2 = tap + q2 * u2 + s2 * d2
      d3 = tap + q3 * u3 + s3 * d3
      u0 = d0 + s0 * u0
      u1 = d1 + s1 * u1
      u2 = d2 + s2 * u2
      u3 = d3 + s3 * u3
    }
    const centre = taps[middle] / 2
    amplitude[i] = 2 * (centre + q0 * u0 + s0 * d0 - (q0 / 2) * u0)
    amplitude[i + 1] = 2 * (centre + q1 * u1 + s1 * d1 - (q1 / 2) * u1)
    amplitude[i + 2] = 2 * (centre + q2 * u2 + s2 * d2 - (q2 / 2) * u2)
    amplitude[i + 3] = 2 * (centre + q3 * u3 + s3 * d3 - (q3 / 2) * u3)
  }
  for (let i = groups; i < frequenciesHz.length; i++) {
    const half = frequenciesHz[i] * scale
    const sine = Math.sin(half)
    const cosine = Math.cos(half)
    const s = sine * sine <= cosine * cosine ? 1 : -1
    const q = s > 0 ? -4 * sine * sine : 4 * cosine * cosine
    let d = 0
    let u = 0
    for (let k = 2 * middle; k > middle; k--) {
      d = taps[k] + q * u + s * d
      u = d + s * u
    }
    amplitude[i] = 2 * (taps[middle] / 2 + (q / 2) * u + s * d)
  }
  return amplitude
}

/** Σ taps[k]·e^(−j2πkf/fs) at one frequency, and the same sum with k·taps[k] (for the group delay). */
export interface KernelSums {
  readonly re: number
  readonly im: number
  readonly weightedRe: number
  readonly weightedIm: number
}

/** Sums of any kernel at one frequency. */
export function kernelSums(taps: Float64Array, frequencyHz: number, samplingRateHz: number): KernelSums {
  const half = (frequencyHz * Math.PI) / samplingRateHz
  const sine = Math.sin(half)
  const cosine = Math.cos(half)
  const s = sine * sine <= cosine * cosine ? 1 : -1
  const q = s > 0 ? -4 * sine * sine : 4 * cosine * cosine
  let d = 0
  let u = 0
  let weightedD = 0
  let weightedU = 0
  for (let k = taps.length - 1; k > 0; k--) {
    d = taps[k] + q * u + s * d
    u = d + s * u
    weightedD = k * taps[k] + q * weightedU + s * weightedD
    weightedU = weightedD + s * weightedU
  }
  const sineOfAngle = 2 * sine * cosine
  return {
    re: taps[0] + (q / 2) * u + s * d,
    im: -u * sineOfAngle,
    weightedRe: (q / 2) * weightedU + s * weightedD,
    weightedIm: -weightedU * sineOfAngle,
  }
}
