import { type AnalogueRoot, pairSections, type Sections } from './second-order-sections.ts'
import { checkChoice, checkCutoffs, checkWhole } from './spec-error.ts'
import type { ButterworthSpec, Pass } from './stage.ts'
import type { WarpedEdges } from './warped-axis.ts'

/** Highest order of one pass, by pass; per edge for band and stop. */
export const MAX_BUTTERWORTH_ORDER: Readonly<Record<Pass, number>> = { low: 12, high: 12, band: 8, stop: 8 }

/** @throws RangeError for a pass, order, cutoff, meaning or direction that cannot be designed. */
export function checkButterworth(spec: ButterworthSpec, samplingRateHz: number): void {
  checkChoice('pass', spec.pass, ['low', 'high', 'band', 'stop'])
  checkChoice('meaning', spec.meaning, ['half-amplitude', 'half-power', 'design'])
  checkChoice('direction', spec.direction, ['forward', 'both'])
  checkWhole('order', spec.order, 1, MAX_BUTTERWORTH_ORDER[spec.pass])
  checkCutoffs(spec.pass, spec.cutoffsHz, samplingRateHz)
}

/**
 * Butterworth filter as second-order sections: zeros, poles and gain of the analogue prototype, band transform on the
 * warped axis, bilinear transform.
 *
 * @param pass   what is let through.
 * @param order  poles of one pass (per edge for band and stop), a whole number ≥ 1. Not checked here.
 * @param edges  warped design edges: see `warpedEdges`.
 * @returns  sections in SciPy's order with its gain placement, and the same rows in the bilinear variable.
 * @see Oppenheim & Schafer, Discrete-Time Signal Processing, ch. 7.
 */
export function butterworthSections(pass: Pass, order: number, edges: WarpedEdges): Sections {
  const { centre, width } = edges
  const zeros: AnalogueRoot[] = []
  const poles: AnalogueRoot[] = []
  const single = pass === 'low' || pass === 'high'
  for (const pole of prototypePoles(order)) {
    if (single) poles.push({ re: pole.re * centre, im: pole.im * centre })
    // the prototype lies on the unit circle, so 1/p of the band-stop is its conjugate, and the pairs are the same
    else poles.push(...bandPoles(pole, width / 2, centre))
  }
  for (let i = 0; i < order; i++) {
    if (pass === 'low' || pass === 'band') zeros.push({ re: Infinity, im: 0 })
    if (pass === 'high' || pass === 'band') zeros.push({ re: 0, im: 0 })
    if (pass === 'stop') zeros.push({ re: 0, im: centre })
  }
  // H(σ = 1) of the transformed prototype is the digital gain, since σ = 1 is z = ∞
  let gain = pass === 'low' ? centre ** order : pass === 'band' ? width ** order : 1
  if (pass === 'stop') gain = (1 + centre * centre) ** order
  for (const { re, im } of poles) gain /= im === 0 ? 1 - re : (1 - re) ** 2 + im ** 2
  return pairSections(zeros, poles, gain)
}

/** Poles of the low-pass of cutoff 1, upper half plane and real axis: exp(jπ(2k + n − 1)/(2n)). */
export function prototypePoles(order: number): AnalogueRoot[] {
  const poles: AnalogueRoot[] = []
  for (let m = order - 1; m > 0; m -= 2) {
    // sin and cos of the angle from the negative real axis
    const angle = (Math.PI * m) / (2 * order)
    poles.push({ re: -Math.cos(angle), im: Math.sin(angle) })
  }
  if (order % 2 === 1) poles.push({ re: -1, im: 0 })
  return poles
}

/** Roots of s² − 2·half·p·s + centre² = 0, the band poles of one prototype pole (with their conjugates if complex). */
function bandPoles(p: AnalogueRoot, half: number, centre: number): AnalogueRoot[] {
  const re = p.re * half
  const im = p.im * half
  if (p.im === 0) {
    const square = (half - centre) * (half + centre)
    if (square < 0) return [{ re, im: Math.sqrt(-square) }]
    const larger = re - Math.sqrt(square)
    return [
      { re: larger, im: 0 },
      { re: (centre * centre) / larger, im: 0 },
    ]
  }
  // w = √((half·p)² − centre²), computed so that its smaller part keeps its relative precision
  const x = re * re - im * im - centre * centre
  const y = 2 * re * im
  const size = Math.hypot(x, y)
  let wRe: number
  let wIm: number
  if (x < 0) {
    wIm = Math.sqrt((size - x) / 2)
    wRe = y / (2 * wIm)
  } else {
    wRe = Math.sqrt((size + x) / 2)
    wIm = y / (2 * wRe)
  }
  // add with like signs first, then the other root from the product centre²: the difference would cancel
  const sign = re * wRe + im * wIm < 0 ? -1 : 1
  const largeRe = re + sign * wRe
  const largeIm = im + sign * wIm
  const scale = (centre * centre) / (largeRe * largeRe + largeIm * largeIm)
  return [
    { re: largeRe, im: Math.abs(largeIm) },
    { re: largeRe * scale, im: Math.abs(largeIm) * scale },
  ]
}
