/**
 * Response of a kernel: sums of taps times cosines and sines. Reinsch's form of Clenshaw's recurrence carries differences of
 * neighbouring partial sums, which keeps the sums' precision close to 0 Hz and to half the sampling rate, where the plain
 * recurrence loses it (Stoer & Bulirsch, Introduction to Numerical Analysis, ch. 2, from memory).
 */

/** Whether a kernel is equal to its reverse, tap by tap, and has a middle tap. */
export function isSymmetric(taps: Float64Array): boolean {
  return taps.length % 2 === 1 && isPalindrome(taps)
}

/** Whether a kernel is equal to its reverse, so that it delays all frequencies equally. */
export function isPalindrome(taps: Float64Array): boolean {
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
  const amplitude = trigonometricSums(taps.subarray(middle), frequenciesHz, samplingRateHz).cosine
  for (let i = 0; i < amplitude.length; i++) amplitude[i] = 2 * amplitude[i] - taps[middle]
  return amplitude
}

/** Cosine and sine sums, one value a frequency. */
export interface TrigonometricSums {
  readonly cosine: Float64Array
  readonly sine: Float64Array
}

/** Σ taps[k]·cos(2πkf/fs) and Σ taps[k]·sin(2πkf/fs), k from 0, at each frequency. */
export function trigonometricSums(
  taps: Float64Array,
  frequenciesHz: Float64Array,
  samplingRateHz: number,
): TrigonometricSums {
  const count = frequenciesHz.length
  const scale = Math.PI / samplingRateHz
  const cosine = new Float64Array(count)
  const sine = new Float64Array(count)
  // 4·sin² of the half angle, negative, in the lower half of the band; 4·cos² in the upper half
  const shifts = new Float64Array(count)
  for (let i = 0; i < count; i++) {
    const half = frequenciesHz[i] * scale
    const s = Math.sin(half)
    const c = Math.cos(half)
    shifts[i] = s * s <= c * c ? -4 * s * s : 4 * c * c
    sine[i] = 2 * s * c
  }
  const ends = new Float64Array(8)
  let moments: Float64Array | null = null
  for (let i = 0; i < count; ) {
    const turn = 2 * Math.abs(frequenciesHz[i]) * scale * (taps.length - 1)
    if (turn <= 1) {
      moments ??= momentsOf(taps)
      cosine[i] = series(moments, turn, 0)
      sine[i] = frequenciesHz[i] < 0 ? -series(moments, turn, 1) : series(moments, turn, 1)
      i++
      continue
    }
    const lower = shifts[i] <= 0
    // four frequencies of one half at a time, since one recurrence waits for its own last step
    const width = i + 3 < count && [1, 2, 3].every((l) => shifts[i + l] <= 0 === lower) ? 4 : 1
    if (width === 1) recurOne(taps, shifts[i], lower, ends)
    else {
      const recur = lower ? recurLower : recurUpper
      recur(taps, shifts[i], shifts[i + 1], shifts[i + 2], shifts[i + 3], ends)
    }
    for (let l = 0; l < width; l++) {
      const difference = ends[2 * l]
      const sum = ends[2 * l + 1]
      cosine[i + l] = taps[0] + (shifts[i + l] / 2) * sum + (lower ? difference : -difference)
      sine[i + l] *= sum
    }
    i += width
  }
  return { cosine, sine }
}

/** So many terms of a series in up to one radian leave out less than 1e-18. */
const TERMS = 20

/** Σ taps[k]·(k/K)^m, K the last index, for m from 0: all that the response near 0 Hz hangs on. */
function momentsOf(taps: Float64Array): Float64Array {
  const moments = new Float64Array(TERMS)
  const last = Math.max(1, taps.length - 1)
  for (let k = taps.length - 1; k >= 0; k--) {
    let term = taps[k]
    for (let m = 0; m < TERMS; m++) {
      moments[m] += term
      term *= k / last
    }
  }
  return moments
}

/** Power series of the cosine sum (from = 0) or the sine sum (from = 1) where the kernel turns by at most one radian. */
function series(moments: Float64Array, turn: number, from: 0 | 1): number {
  let sum = 0
  // from the smallest term: 1 − z²/((m + 1)(m + 2))·(…), each bracket with its own moment
  for (let m = TERMS - 2 + from; m >= 0; m -= 2) sum = moments[m] - ((turn * turn) / ((m + 1) * (m + 2))) * sum
  return from === 0 ? sum : turn * sum
}

function recurOne(taps: Float64Array, shift: number, lower: boolean, ends: Float64Array): void {
  let d = 0
  let u = 0
  if (lower) {
    for (let k = taps.length - 1; k > 0; k--) {
      d = taps[k] + d + shift * u
      u = d + u
    }
  } else {
    for (let k = taps.length - 1; k > 0; k--) {
      d = taps[k] - d + shift * u
      u = d - u
    }
  }
  ends[0] = d
  ends[1] = u
}

function recurLower(taps: Float64Array, q0: number, q1: number, q2: number, q3: number, ends: Float64Array): void {
  let d0 = 0
  let d1 = 0
  let d2 = 0
  let d3 = 0
  let u0 = 0
  let u1 = 0
  let u2 = 0
  let u3 = 0
  for (let k = taps.length - 1; k > 0; k--) {
    const tap = taps[k]
    d0 = tap + d0 + q0 * u0
    d1 = tap + d1 + q1 * u1
    d2 = tap + d2 + q2 * u2
    d3 = tap + d3 + q3 * u3
    u0 = d0 + u0
    u1 = d1 + u1
    u2 = d2 + u2
    u3 = d3 + u3
  }
  writeEnds(ends, d0, d1, d2, d3, u0, u1, u2, u3)
}

function recurUpper(taps: Float64Array, q0: number, q1: number, q2: number, q3: number, ends: Float64Array): void {
  let d0 = 0
  let d1 = 0
  let d2 = 0
  let d3 = 0
  let u0 = 0
  let u1 = 0
  let u2 = 0
  let u3 = 0
  for (let k = taps.length - 1; k > 0; k--) {
    const tap = taps[k]
    d0 = tap - d0 + q0 * u0
    d1 = tap - d1 + q1 * u1
    d2 = tap - d2 + q2 * u2
    d3 = tap - d3 + q3 * u3
    u0 = d0 - u0
    u1 = d1 - u1
    u2 = d2 - u2
    u3 = d3 - u3
  }
  writeEnds(ends, d0, d1, d2, d3, u0, u1, u2, u3)
}

function writeEnds(
  ends: Float64Array,
  d0: number,
  d1: number,
  d2: number,
  d3: number,
  u0: number,
  u1: number,
  u2: number,
  u3: number,
): void {
  ends[0] = d0
  ends[1] = u0
  ends[2] = d1
  ends[3] = u1
  ends[4] = d2
  ends[5] = u2
  ends[6] = d3
  ends[7] = u3
}
