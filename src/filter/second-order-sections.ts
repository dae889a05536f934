/**
 * Zeros and poles on the bilinear transform's axis to second-order sections, paired and ordered as SciPy's
 * `zpk2sos(..., pairing='nearest')` does it, so that rows compare one to one.
 *
 * A root s on the axis σ = (1 − z⁻¹)/(1 + z⁻¹) is the digital root z = (1 + s)/(1 − s): s = 0 is z = 1, s = ∞ is
 * z = −1, s = −1 is z = 0.
 */

/** A real root or, with im > 0, a pair of complex conjugates. `re` may be Infinity (z = −1). */
export interface AnalogueRoot {
  readonly re: number
  readonly im: number
}

/** Rows b0 b1 b2 a0 a1 a2 and c2 c1 c0 d2 d1 d0 of the same sections. */
export interface Sections {
  readonly sections: Float64Array
  readonly analogue: Float64Array
}

interface Root {
  readonly s: AnalogueRoot
  readonly zRe: number
  readonly zIm: number
}

/** A quadratic of one row: digital 1 + z1·z⁻¹ + z2·z⁻², analogue s2·σ² + s1·σ + s0, `atOne` its value at σ = 1. */
interface Quadratic {
  readonly z1: number
  readonly z2: number
  readonly s2: number
  readonly s1: number
  readonly s0: number
  readonly atOne: number
}

const ORIGIN: AnalogueRoot = { re: -1, im: 0 }

/**
 * @param zeros  zeros, `poles` poles: conjugate pairs once; as many roots in all (pairs counted twice) as poles.
 * @param gain   digital gain: H(z) = gain·Π(1 − zero·z⁻¹)/Π(1 − pole·z⁻¹). It goes into the first row.
 */
export function pairSections(zeros: readonly AnalogueRoot[], poles: readonly AnalogueRoot[], gain: number): Sections {
  const p = sortRoots(poles)
  const z = sortRoots(zeros)
  if (countRoots(poles) % 2 === 1) {
    p.push(toRoot(ORIGIN))
    z.push(toRoot(ORIGIN))
    p.sort(byRealPart)
    z.sort(byRealPart)
  }
  const rows = (p.length + p.filter((root) => root.zIm !== 0).length) / 2
  const sections = new Float64Array(6 * rows)
  const analogue = new Float64Array(6 * rows)

  // the poles nearest to the unit circle go last
  for (let row = rows - 1; row >= 0; row--) {
    const first = takeWorst(p, false)
    const poleRoots = first.zIm !== 0 ? [first] : [first, takeWorst(p, true)]
    const zero = takeNearest(z, first, false)
    const zeroRoots = zero.zIm !== 0 ? [zero] : [zero, takeNearest(z, first, true)]
    writeRow(sections, analogue, row, zeroRoots, poleRoots, row === 0 ? gain : 1)
  }
  return { sections, analogue }
}

function countRoots(roots: readonly AnalogueRoot[]): number {
  return roots.reduce((sum, root) => sum + (root.im === 0 ? 1 : 2), 0)
}

function toRoot(s: AnalogueRoot): Root {
  if (s.re === Infinity) return { s, zRe: -1, zIm: 0 }
  if (s.im === 0) return { s, zRe: (1 + s.re) / (1 - s.re), zIm: 0 }
  const scale = (1 - s.re) ** 2 + s.im ** 2
  return { s, zRe: (1 - s.re ** 2 - s.im ** 2) / scale, zIm: (2 * s.im) / scale }
}

/** Pairs before real roots, each by real part and then by imaginary part. */
function byRealPart(a: Root, b: Root): number {
  if ((a.zIm === 0) !== (b.zIm === 0)) return a.zIm === 0 ? 1 : -1
  return a.zRe - b.zRe || a.zIm - b.zIm
}

function sortRoots(roots: readonly AnalogueRoot[]): Root[] {
  return roots.map(toRoot).sort(byRealPart)
}

function takeWorst(roots: Root[], realOnly: boolean): Root {
  let best = -1
  let bestDistance = Infinity
  for (let i = 0; i < roots.length; i++) {
    if (realOnly && roots[i].zIm !== 0) continue
    const distance = Math.abs(1 - Math.sqrt(roots[i].zRe ** 2 + roots[i].zIm ** 2))
    if (best < 0 || distance < bestDistance) {
      best = i
      bestDistance = distance
    }
  }
  return roots.splice(best, 1)[0]
}

function takeNearest(roots: Root[], to: Root, realOnly: boolean): Root {
  let best = -1
  let bestDistance = Infinity
  for (let i = 0; i < roots.length; i++) {
    if (realOnly && roots[i].zIm !== 0) continue
    const distance = (roots[i].zRe - to.zRe) ** 2 + (roots[i].zIm - to.zIm) ** 2
    if (best < 0 || distance < bestDistance) {
      best = i
      bestDistance = distance
    }
  }
  return roots.splice(best, 1)[0]
}

function quadratic(roots: readonly Root[]): Quadratic {
  if (roots.length === 1) {
    const { re, im } = roots[0].s
    const s1 = -2 * re
    const s0 = re * re + im * im
    const atOne = 1 + s1 + s0
    return { z1: (-2 * (1 - s0)) / atOne, z2: (1 - s1 + s0) / atOne, s2: 1, s1, s0, atOne }
  }
  const [a, b] = roots
  const z1 = 0 - (a.zRe + b.zRe)
  const z2 = a.zRe * b.zRe + 0 // no −0
  const finite = roots.filter((root) => root.s.re !== Infinity).map((root) => root.s.re)
  if (finite.length === 0) return { z1, z2, s2: 0, s1: 0, s0: 1, atOne: 1 }
  if (finite.length === 1) return { z1, z2, s2: 0, s1: 1, s0: -finite[0], atOne: 1 - finite[0] }
  const [c, d] = finite
  return { z1, z2, s2: 1, s1: -(c + d), s0: c * d, atOne: (1 - c) * (1 - d) }
}

function writeRow(
  sections: Float64Array,
  analogue: Float64Array,
  row: number,
  zeroRoots: Root[],
  poleRoots: Root[],
  gain: number,
): void {
  const digitalZeros = quadratic(zeroRoots)
  const digitalPoles = quadratic(poleRoots)
  const at = 6 * row
  sections[at] = gain
  sections[at + 1] = gain * digitalZeros.z1
  sections[at + 2] = gain * digitalZeros.z2
  sections[at + 3] = 1
  sections[at + 4] = digitalPoles.z1
  sections[at + 5] = digitalPoles.z2

  // a zero and a pole at z = 0 cancel: the row is of first order
  const zeroAtOrigin = zeroRoots.findIndex((root) => root.s === ORIGIN)
  const poleAtOrigin = poleRoots.findIndex((root) => root.s === ORIGIN)
  if (zeroAtOrigin >= 0 && poleAtOrigin >= 0) {
    const zero = zeroRoots[1 - zeroAtOrigin].s.re
    const pole = poleRoots[1 - poleAtOrigin].s.re
    const scale = gain * (1 - pole)
    if (zero === Infinity) analogue[at + 2] = scale
    else {
      analogue[at + 1] = scale / (1 - zero)
      analogue[at + 2] = (-zero * scale) / (1 - zero) + 0
    }
    analogue[at + 4] = 1
    analogue[at + 5] = -pole
    return
  }
  const scale = (gain * digitalPoles.atOne) / digitalZeros.atOne
  analogue[at] = scale * digitalZeros.s2
  analogue[at + 1] = scale * digitalZeros.s1 + 0
  analogue[at + 2] = scale * digitalZeros.s0 + 0
  analogue[at + 3] = 1
  analogue[at + 4] = digitalPoles.s1
  analogue[at + 5] = digitalPoles.s0
}
