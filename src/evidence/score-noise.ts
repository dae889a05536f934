import { checkNoise, noiseDensityAt, noiseKinksHz, noiseLines, type NoiseLine, type NoiseSpec } from '../erp/noise.ts'
import { gaussLegendre } from './gauss-legendre.ts'
import { directTransform, windowPower, type WindowPower } from './window-power.ts'

/**
 * The noise of a score. A linear score of one trial is Σ g[m]·x[m] with the effective window g; noise of one-sided density S(f) gives the
 * mean over N trials the variance (1/N)·∫₀^{fs/2} S(f)·|G(f)|² df. The integral is exact for g because nothing of g or of S is left
 * out: S is flat below its lowest kink, and |G|² is a trigonometric polynomial.
 */

const RULE = gaussLegendre(8)
/** Lowest limit of the octave-wide panels: what lies below is one panel, over which S is flat and |G|² next to constant. */
const LOWEST_HZ = 1e-4
/** Panels of one block of `scoreVariance`. */
const BLOCK = 4096

/**
 * Variance of a linear score, in the score's unit squared (µV², for areas (µV·s)²).
 *
 * Gauss–Legendre panels of at most an octave and at most one oscillation of |G|², with limits at every kink of S (relative error below
 * 1e-6); the white part by Parseval, S_w·(fs/2)·Σg². Lines of random phase add (1/N)·(A²/2)·|G(f₀)|²; lines locked to the event are
 * the same in every trial and add nothing (see `lockedLineContribution`). Lines at or above fs/2 are taken as removed by the recording's anti-alias filter.
 *
 * @param window         g, the weights of unfiltered samples (for epochs over all samples that it touches).
 * @param samplingRateHz fs.
 * @param trials         N ≥ 1.
 * @throws RangeError for a window that is not finite, a bad noise, fs or N.
 */
export function scoreVariance(window: Float64Array, noise: NoiseSpec, samplingRateHz: number, trials: number): number {
  checkArguments(window, noise, samplingRateHz, trials)
  const nyquist = samplingRateHz / 2
  let whiteUv2PerHz = 0
  let coloured: NoiseSpec | null = noise
  let variance = 0
  if (noise.kind === 'model') {
    whiteUv2PerHz = noise.whiteUv2PerHz
    coloured = isColoured(noise) ? { ...noise, whiteUv2PerHz: 0 } : null
    let squares = 0
    for (let m = 0; m < window.length; m++) squares += window[m] * window[m]
    variance += whiteUv2PerHz * nyquist * squares
  }
  if (coloured) {
    const power = windowPower(window, samplingRateHz)
    const limits = panelLimits(coloured, nyquist, samplingRateHz / Math.max(1, window.length))
    const density = noiseDensityAt(coloured)
    // in blocks, so that the longest windows need no more memory than themselves
    for (let from = 0; from + 1 < limits.length; from += BLOCK) {
      const { hz, weights } = nodesOf(limits.slice(from, from + BLOCK + 1))
      for (let i = 0; i < hz.length; i++) variance += weights[i] * density(hz[i]) * power(hz[i])
    }
  }
  for (const line of randomLines(noise, nyquist)) {
    const { re, im } = directTransform(window, line.hz / samplingRateHz)
    variance += (line.amplitudeUv ** 2 / 2) * (re * re + im * im)
  }
  return variance / trials
}

/**
 * What interference locked to the event adds to a filtered score, in the score's unit: A·|G(f₀)|·cos(φ − arg G(f₀)), with
 * G(f) = Σ g[m]·e^(−j2πf·t[m]) and t from the event. It is the same for any number of trials and is no variance.
 *
 * @param window  g.
 * @param startMs time of window[0] from the event.
 * @throws RangeError for a window or line that is not finite.
 */
export function lockedLineContribution(
  window: Float64Array,
  startMs: number,
  samplingRateHz: number,
  line: NoiseLine,
): number {
  checkWindow(window)
  checkSampling(samplingRateHz)
  const phase = line.phaseRad ?? 0
  if (!Number.isFinite(line.hz + line.amplitudeUv + phase + startMs)) {
    throw new RangeError(
      `a locked line must have finite numbers, was ${line.amplitudeUv} µV at ${line.hz} Hz, phase ${phase}, from ${startMs} ms`,
    )
  }
  const { re, im } = directTransform(window, line.hz / samplingRateHz)
  // Σ g·A·cos(θ + 2πf(t − start)) with θ the tone's phase at window[0], and re − j·(−im) = Σ g·e^(−j…)
  const turns = (line.hz * startMs) / 1000
  const theta = phase + 2 * Math.PI * (turns - Math.round(turns))
  return line.amplitudeUv * (re * Math.cos(theta) + im * Math.sin(theta))
}

/**
 * The same variance by the chain's response H instead of a long effective window: (1/N)·∫ S·|H|²·|W|² df, with W the transform of
 * the score's own short weights. For the continuous extent only, where |G| = |H|·|W| exactly; under a slider it costs one response at a
 * few hundred frequencies and a sum, because what hangs on score and noise alone is kept.
 *
 * |H|² is a polynomial of degree 7 on each panel (a quarter octave, octaves below 0.002 Hz) and S·|W|² is integrated against it on
 * a grid as fine as `scoreVariance`'s. That follows Butterworth stages and amplifiers of any order to 1e-5. Narrower features need `breaksHz`.
 *
 * @param weights  w of the score with its baseline, on consecutive samples. Kept as a key: do not change it afterwards.
 * @param noise    kept as a key too.
 * @param response H at given frequencies; called once, or twice where there are lines.
 * @param breaksHz extra panel limits, so that the grid is fine where |H| changes within less than a quarter octave (edges of long
 *   windowed sincs, notches): see `responseBreaksHz`. Those outside 0..fs/2 are ignored.
 * @throws RangeError as `scoreVariance`.
 */
export function scoreVarianceOfResponse(
  weights: Float64Array,
  response: (frequenciesHz: Float64Array) => { re: Float64Array; im: Float64Array },
  noise: NoiseSpec,
  samplingRateHz: number,
  trials: number,
  breaksHz: readonly number[] = [],
): number {
  checkArguments(weights, noise, samplingRateHz, trials)
  const { hz, masses } = weightedNodes(weights, noise, samplingRateHz, breaksHz)
  const h = response(hz)
  let variance = 0
  for (let i = 0; i < hz.length; i++) variance += masses[i] * (h.re[i] * h.re[i] + h.im[i] * h.im[i])
  const lines = randomLines(noise, samplingRateHz / 2)
  if (lines.length > 0) {
    const atLines = response(Float64Array.from(lines, (line) => line.hz))
    lines.forEach((line, i) => {
      const { re, im } = directTransform(weights, line.hz / samplingRateHz)
      variance += (line.amplitudeUv ** 2 / 2) * (re * re + im * im) * (atLines.re[i] ** 2 + atLines.im[i] ** 2)
    })
  }
  return variance / trials
}

/** A panel's nodes for |H|² and ∫ ℓ_i·S·|W|² over it, ℓ_i the Lagrange polynomials of the nodes. */
interface WeightedNodes {
  readonly hz: Float64Array
  readonly masses: Float64Array
}

interface Prepared {
  readonly power: WindowPower
  readonly density: (hz: number) => number
  readonly oscillationHz: number
  readonly limits: readonly number[]
  readonly panels: WeightedNodes[]
  readonly whole: WeightedNodes
  /** The last grid with breaks, which a drag on another token asks for again. */
  broken: { key: string; nodes: WeightedNodes } | null
}

const prepared = new WeakMap<Float64Array, WeakMap<NoiseSpec, Map<number, Prepared>>>()

function weightedNodes(
  weights: Float64Array,
  noise: NoiseSpec,
  samplingRateHz: number,
  breaksHz: readonly number[],
): WeightedNodes {
  const ready = prepare(weights, noise, samplingRateHz)
  const nyquist = samplingRateHz / 2
  const breaks = breaksHz.filter((hz) => hz > 0 && hz < nyquist).sort((a, b) => a - b)
  if (breaks.length === 0) return ready.whole
  const key = breaks.join()
  if (ready.broken?.key !== key) {
    const pieces: WeightedNodes[] = []
    let b = 0
    for (let p = 0; p + 1 < ready.limits.length; p++) {
      const inside: number[] = []
      while (b < breaks.length && breaks[b] <= ready.limits[p]) b++
      while (b < breaks.length && breaks[b] < ready.limits[p + 1]) inside.push(breaks[b++])
      if (inside.length === 0) {
        pieces.push(ready.panels[p])
        continue
      }
      const limits = [ready.limits[p], ...inside, ready.limits[p + 1]]
      for (let k = 0; k + 1 < limits.length; k++) {
        // two breaks that all but coincide leave nothing between them
        if (limits[k + 1] - limits[k] > 1e-9 * limits[k + 1]) {
          pieces.push(weighPanel(limits[k], limits[k + 1], ready.power, ready.density, ready.oscillationHz))
        }
      }
    }
    ready.broken = { key, nodes: join(pieces) }
  }
  return ready.broken.nodes
}

function prepare(weights: Float64Array, noise: NoiseSpec, samplingRateHz: number): Prepared {
  let byNoise = prepared.get(weights)
  if (!byNoise) prepared.set(weights, (byNoise = new WeakMap()))
  let byRate = byNoise.get(noise)
  if (!byRate) byNoise.set(noise, (byRate = new Map()))
  let ready = byRate.get(samplingRateHz)
  if (!ready) {
    const nyquist = samplingRateHz / 2
    const power = windowPower(weights, samplingRateHz)
    const density = noiseDensityAt(noise)
    const oscillationHz = samplingRateHz / Math.max(1, weights.length)
    const limits = responseLimits(noise, nyquist)
    const panels: WeightedNodes[] = []
    for (let p = 0; p + 1 < limits.length; p++)
      panels.push(weighPanel(limits[p], limits[p + 1], power, density, oscillationHz))
    ready = { power, density, oscillationHz, limits, panels, whole: join(panels), broken: null }
    byRate.set(samplingRateHz, ready)
  }
  return ready
}

/** Barycentric weights of the rule's nodes, for the Lagrange polynomials through them. */
const NODE_WEIGHTS = RULE.nodes.map(
  (x, i) => 1 / RULE.nodes.reduce((p, other, k) => (k === i ? p : p * (x - other)), 1),
)

function weighPanel(
  fromHz: number,
  toHz: number,
  power: WindowPower,
  density: (hz: number) => number,
  oscillationHz: number,
): WeightedNodes {
  const centre = (fromHz + toHz) / 2
  const half = (toHz - fromHz) / 2
  const count = RULE.nodes.length
  const hz = RULE.nodes.map((x) => centre + half * x)
  const masses = new Float64Array(count)
  const pieces = Math.ceil((toHz - fromHz) / oscillationHz)
  if (pieces <= 1) {
    for (let i = 0; i < count; i++) masses[i] = half * RULE.weights[i] * density(hz[i]) * power(hz[i])
    return { hz, masses }
  }
  // 1/(x − node) stands for the polynomial through it: Σ of the terms makes them add up to 1
  const terms = new Float64Array(count)
  for (let piece = 0; piece < pieces; piece++) {
    for (let j = 0; j < count; j++) {
      const x = (2 * piece + 1 + RULE.nodes[j]) / pieces - 1
      const fineHz = centre + half * x
      const mass = (half / pieces) * RULE.weights[j] * density(fineHz) * power(fineHz)
      let sum = 0
      let exact = -1
      for (let i = 0; i < count; i++) {
        const distance = x - RULE.nodes[i]
        if (distance === 0) exact = i
        terms[i] = NODE_WEIGHTS[i] / distance
        sum += terms[i]
      }
      if (exact >= 0) masses[exact] += mass
      else for (let i = 0; i < count; i++) masses[i] += (mass * terms[i]) / sum
    }
  }
  return { hz, masses }
}

function join(pieces: readonly WeightedNodes[]): WeightedNodes {
  let count = 0
  for (const piece of pieces) count += piece.hz.length
  const hz = new Float64Array(count)
  const masses = new Float64Array(count)
  let at = 0
  for (const piece of pieces) {
    hz.set(piece.hz, at)
    masses.set(piece.masses, at)
    at += piece.hz.length
  }
  return { hz, masses }
}

/** Limits of the panels of `scoreVarianceOfResponse`: octaves to 0.002 Hz, quarter octaves above, the noise's kinks and its alpha peak. */
export function responseLimits(noise: NoiseSpec, nyquist: number): number[] {
  const limits = [0]
  for (let hz = LOWEST_HZ; hz < nyquist; hz *= hz < 0.002 ? 2 : 2 ** 0.25) limits.push(hz)
  return withKinks(limits, noise, nyquist)
}

/** Ascending panel limits from 0 to fs/2, no panel wider than an octave or than `widestHz`. */
function panelLimits(noise: NoiseSpec, nyquist: number, widestHz: number): number[] {
  const octaves = [0]
  for (let hz = LOWEST_HZ; hz < nyquist; hz *= 2) octaves.push(hz)
  const coarse = withKinks(octaves, noise, nyquist)
  const limits = [0]
  for (let p = 0; p + 1 < coarse.length; p++) {
    const pieces = Math.ceil((coarse[p + 1] - coarse[p]) / widestHz)
    for (let k = 1; k <= pieces; k++) limits.push(coarse[p] + ((coarse[p + 1] - coarse[p]) * k) / pieces)
  }
  return limits
}

function withKinks(limits: readonly number[], noise: NoiseSpec, nyquist: number): number[] {
  const all = [...limits, ...noiseKinksHz(noise), nyquist]
  if (noise.kind === 'model' && noise.alpha) {
    const { centreHz, sdHz } = noise.alpha
    for (let k = -8; k <= 8; k++) all.push(centreHz + k * sdHz)
  }
  const inside = all.filter((hz) => hz >= 0 && hz <= nyquist).sort((a, b) => a - b)
  return inside.filter((hz, i) => i === 0 || hz - inside[i - 1] > 1e-12 * nyquist)
}

function nodesOf(limits: readonly number[]): { hz: Float64Array; weights: Float64Array } {
  const count = RULE.nodes.length
  const hz = new Float64Array((limits.length - 1) * count)
  const weights = new Float64Array(hz.length)
  for (let p = 0; p + 1 < limits.length; p++) {
    const half = (limits[p + 1] - limits[p]) / 2
    for (let i = 0; i < count; i++) {
      hz[p * count + i] = limits[p] + half * (1 + RULE.nodes[i])
      weights[p * count + i] = half * RULE.weights[i]
    }
  }
  return { hz, weights }
}

function isColoured(noise: Extract<NoiseSpec, { kind: 'model' }>): boolean {
  return noise.levelAt1HzUv2PerHz > 0 || (noise.driftAt1HzUv2PerHz ?? 0) > 0 || (noise.alpha?.peakUv2PerHz ?? 0) > 0
}

/** Lines of random phase that a recording can hold. */
export function randomLines(noise: NoiseSpec, nyquist: number): NoiseLine[] {
  return noiseLines(noise).filter((line) => !line.locked && line.hz < nyquist)
}

function checkArguments(window: Float64Array, noise: NoiseSpec, samplingRateHz: number, trials: number): void {
  checkWindow(window)
  checkNoise(noise)
  checkSampling(samplingRateHz)
  if (!(trials >= 1) || !Number.isFinite(trials)) throw new RangeError(`trials must be at least 1, was ${trials}`)
}

function checkWindow(window: Float64Array): void {
  for (let m = 0; m < window.length; m++) {
    if (!Number.isFinite(window[m]))
      throw new RangeError(`window must hold finite numbers, window[${m}] was ${window[m]}`)
  }
}

function checkSampling(samplingRateHz: number): void {
  if (!(samplingRateHz > 0) || !Number.isFinite(samplingRateHz)) {
    throw new RangeError(`samplingRateHz must be positive and finite, was ${samplingRateHz}`)
  }
}
