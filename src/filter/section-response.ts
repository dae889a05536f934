/**
 * Response of recursive sections in the bilinear variable: rows c2 c1 c0 d2 d1 d0 at σ = j·tan(πf/fs). The poles of low
 * cutoffs keep their precision there, where polynomials in z lose it.
 */

/**
 * Multiplies a response by that of the sections of one pass.
 *
 * @param re, im  response so far, changed in place.
 * @param passes  1, or 2 for the squared magnitude (zero phase).
 */
export function multiplyBySections(
  analogue: Float64Array,
  passes: 1 | 2,
  frequenciesHz: Float64Array,
  samplingRateHz: number,
  re: Float64Array,
  im: Float64Array,
): void {
  const scale = Math.PI / samplingRateHz
  for (let i = 0; i < frequenciesHz.length; i++) {
    const t = Math.tan(frequenciesHz[i] * scale)
    const square = t * t
    let a = 1
    let b = 0
    let power = 1
    for (let row = 0; row < analogue.length; row += 6) {
      const numeratorRe = analogue[row + 2] - analogue[row] * square
      const numeratorIm = analogue[row + 1] * t
      const denominatorRe = analogue[row + 5] - analogue[row + 3] * square
      const denominatorIm = analogue[row + 4] * t
      const size = denominatorRe * denominatorRe + denominatorIm * denominatorIm
      if (passes === 2) {
        power *= (numeratorRe * numeratorRe + numeratorIm * numeratorIm) / size
        continue
      }
      const quotientRe = (numeratorRe * denominatorRe + numeratorIm * denominatorIm) / size
      const quotientIm = (numeratorIm * denominatorRe - numeratorRe * denominatorIm) / size
      const product = a * quotientRe - b * quotientIm
      b = a * quotientIm + b * quotientRe
      a = product
    }
    if (passes === 2) {
      re[i] *= power
      im[i] *= power
    } else {
      const product = re[i] * a - im[i] * b
      im[i] = re[i] * b + im[i] * a
      re[i] = product
    }
  }
}

/**
 * Phase of one pass in rad, continuous in frequency but for the sign changes at zeros on the unit circle: each section's
 * numerator and denominator turn by at most half a turn between 0 Hz and half the sampling rate.
 */
export function sectionsPhaseRad(analogue: Float64Array, frequencyHz: number, samplingRateHz: number): number {
  const t = Math.tan((frequencyHz * Math.PI) / samplingRateHz)
  let phase = 0
  for (let row = 0; row < analogue.length; row += 6) {
    phase += Math.atan2(analogue[row + 1] * t, analogue[row + 2] - analogue[row] * t * t)
    phase -= Math.atan2(analogue[row + 4] * t, analogue[row + 5] - analogue[row + 3] * t * t)
  }
  return phase
}

/** Group delay of one pass in s: −dφ/dω, term by term in closed form. */
export function sectionsGroupDelaySeconds(analogue: Float64Array, frequencyHz: number, samplingRateHz: number): number {
  const t = Math.tan((frequencyHz * Math.PI) / samplingRateHz)
  let slope = 0
  for (let row = 0; row < analogue.length; row += 6) {
    slope += argumentSlope(analogue[row + 3], analogue[row + 4], analogue[row + 5], t)
    slope -= argumentSlope(analogue[row], analogue[row + 1], analogue[row + 2], t)
  }
  // dt/dω = (1 + t²)/(2fs)
  return slope / (2 * samplingRateHz)
}

/** (1 + t²)·d/dt arg(q2·(jt)² + q1·jt + q0); 0 where zeros lie on the unit circle, which turn nothing. */
function argumentSlope(q2: number, q1: number, q0: number, t: number): number {
  if (q1 === 0) return 0
  const square = t * t
  // a root at σ = 0 turns nothing either, and is divided out: at 0 Hz it would leave 0/0
  if (q0 === 0) return (q1 * q2 * (1 + square)) / (q1 * q1 + q2 * q2 * square)
  if (square <= 1) {
    const real = q0 - q2 * square
    return (q1 * (q0 + q2 * square) * (1 + square)) / (real * real + q1 * q1 * square)
  }
  // the same, divided by t⁴, so that nothing overflows towards half the sampling rate
  const inverse = 1 / square
  const real = q0 * inverse - q2
  return (q1 * (q0 * inverse + q2) * (1 + inverse)) / (real * real + q1 * q1 * inverse)
}
