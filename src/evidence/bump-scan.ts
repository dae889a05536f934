import { seededRandom } from '../erp/seeded-random.ts'
import { checkValues } from '../erp/time-axis.ts'
import type { Chain } from '../filter/chain.ts'
import { actOn } from './acting-stages.ts'
import {
  inCoordinates,
  type LateOnlyModel,
  lateOnlyModel,
  type LateOnlyOptions,
  raisedCosine,
} from './late-only-model.ts'
import type { ScanProgress } from './onset-scan.ts'
import { restrictedFit, solveComponents } from './restricted-likelihood.ts'
import { rowProducts } from './row-products.ts'

/** An early component of one width at one place. */
export interface BumpRow {
  readonly fromMs: number
  readonly toMs: number
  /** Its amplitude in the unfiltered waveform, µV, where it is the only early one. */
  readonly amplitudeUv: number
  readonly standardError: number
  readonly z: number
}

export interface BumpScan {
  readonly rows: readonly BumpRow[]
  /** The row of the largest |z|. */
  readonly strongest: BumpRow
  /** Share of draws without early activity whose largest |z| is at least that, (1 + k)/(1 + draws). */
  readonly level: number
  /** |z| that 5 % of such draws exceed somewhere. */
  readonly criticalZ: number
  readonly draws: number
}

export interface BumpOptions {
  /** Full widths of the raised cosines; default 40, 80 and 160 ms. */
  readonly widthsMs?: readonly number[]
  /** Where bumps may lie; default from the epoch's start to the first moment of late activity. */
  readonly fromMs?: number
  readonly toMs?: number
  /** Draws of the bootstrap, default 2000. */
  readonly draws?: number
  readonly seed?: number
}

const WIDTHS_MS = [40, 80, 160]
const DRAWS = 2000
const DRAWS_A_STEP = 100
/** A bump of which the chain and the constant leave less than this of its size tells nothing. */
const LEAST_LEFT = 1e-6

/**
 * Early components of several widths and places (every quarter of a width), each against the same M, with s and a of the fit on the stated window:
 * z = kᵀPy/√(kᵀPk) with k the filtered bump and P = M⁻¹ − M⁻¹1(1ᵀM⁻¹1)⁻¹1ᵀM⁻¹. The level of the largest |z| is that of draws from
 * the same M, since it is the largest of many.
 *
 * A generator, so that a worker can tell how far it is and stop.
 *
 * @throws RangeError as `lateOnlyFit`, and where no bump fits before the late activity.
 * @see Efron & Tibshirani, An Introduction to the Bootstrap, 1993, ch. 16 (level of a statistic by parametric draws).
 */
export function* scanBumps(
  y: Float64Array,
  chain: Chain,
  options: LateOnlyOptions,
  bumps: BumpOptions = {},
): Generator<ScanProgress, BumpScan> {
  checkValues(y, options.timesMs)
  const draws = bumps.draws ?? DRAWS
  if (!Number.isInteger(draws) || draws < 20 || draws > 1e6) {
    throw new RangeError(`draws must be a whole number from 20 to 1000000, was ${draws}`)
  }
  const model = lateOnlyModel(chain, options)
  const places = placesOf(model, bumps)
  const total = 2 + Math.ceil(draws / DRAWS_A_STEP)
  yield { done: 1, total }

  const { components, size } = model
  const own = inCoordinates(model, [y])
  const { s, a } = restrictedFit(components, own)
  const tests = bumpTests(model, options.timesMs, places, s, a)
  if (tests.rows.length === 0) {
    throw new RangeError('the chain must let something of a bump before the late activity through, let nothing through')
  }
  const scores = rowProducts(tests.weights, tests.rows.length, own, 1, size)
  const rows = tests.rows.map(({ fromMs, toMs, information }, j): BumpRow => {
    const standardError = 1 / Math.sqrt(information)
    return { fromMs, toMs, amplitudeUv: scores[j] * standardError, standardError, z: scores[j] }
  })
  const strongest = rows.reduce((most, row) => (Math.abs(row.z) > Math.abs(most.z) ? row : most))
  yield { done: 2, total }

  const random = seededRandom(bumps.seed ?? 1)
  const largest: number[] = []
  while (largest.length < draws) {
    const count = Math.min(DRAWS_A_STEP, draws - largest.length)
    const drawn = new Float64Array(count * size)
    for (let d = 0; d < count; d++) drawFromModel(model, s, a, random.normal, drawn, d * size)
    const z = rowProducts(drawn, count, tests.weights, rows.length, size)
    for (let d = 0; d < count; d++) {
      let most = 0
      for (let j = 0; j < rows.length; j++) most = Math.max(most, Math.abs(z[d * rows.length + j]))
      largest.push(most)
    }
    yield { done: 2 + Math.ceil(largest.length / DRAWS_A_STEP), total }
  }
  largest.sort((p, q) => p - q)
  const asLarge = largest.filter((most) => most >= Math.abs(strongest.z)).length
  return {
    rows,
    strongest,
    level: (1 + asLarge) / (1 + draws),
    criticalZ: largest[Math.min(draws - 1, Math.ceil(0.95 * draws) - 1)],
    draws,
  }
}

interface Place {
  readonly fromMs: number
  readonly toMs: number
  readonly first: number
  readonly last: number
}

function placesOf(model: LateOnlyModel, bumps: BumpOptions): Place[] {
  const { startMs, stepMs, columns, n } = model
  const lateMs = startMs + columns.onset * stepMs
  const fromMs = bumps.fromMs ?? startMs
  const toMs = bumps.toMs ?? lateMs
  const places: Place[] = []
  for (const widthMs of bumps.widthsMs ?? WIDTHS_MS) {
    if (!(widthMs >= 4 * stepMs)) {
      throw new RangeError(`widthsMs must be at least 4 samples (${4 * stepMs} ms), one was ${widthMs}`)
    }
    for (let at = fromMs; at + widthMs <= toMs + 1e-6 * stepMs; at += Math.max(stepMs, widthMs / 4)) {
      const first = Math.max(0, Math.ceil((at - startMs) / stepMs - 1e-6))
      const last = Math.min(n - 1, Math.floor((at + widthMs - startMs) / stepMs + 1e-6))
      if (last > first) places.push({ fromMs: at, toMs: at + widthMs, first, last })
    }
  }
  if (places.length === 0) {
    throw new RangeError(
      `a bump must fit between ${fromMs} and ${toMs} ms, the widths were ${bumps.widthsMs ?? WIDTHS_MS} ms`,
    )
  }
  return places
}

/** P·k/√(kᵀPk) of every bump k, so that its product with y is z. */
function bumpTests(model: LateOnlyModel, timesMs: Float64Array, places: readonly Place[], s: number, a: number) {
  const { components, size, stages, n } = model
  const filtered = places.map((place) =>
    actOn(stages, raisedCosine(timesMs, place, place.first, place.last), place.first, n),
  )
  const own = inCoordinates(model, filtered)
  const ones = components.fixed[1]
  const ofOnes = solveComponents(components, s, a, ones)
  const onesOnes = dot(ones, ofOnes)
  const rows: { fromMs: number; toMs: number; information: number }[] = []
  const weights: Float64Array[] = []
  places.forEach(({ fromMs, toMs }, j) => {
    const k = own.slice(j * size, (j + 1) * size)
    const solved = solveComponents(components, s, a, k)
    const share = dot(ofOnes, k) / onesOnes
    for (let i = 0; i < size; i++) solved[i] -= share * ofOnes[i]
    const information = dot(solved, k)
    const square = filtered[j].reduce((sum, value) => sum + value * value, 0)
    if (!(square > LEAST_LEFT) || !(information > 0)) return
    const scale = 1 / Math.sqrt(information)
    rows.push({ fromMs, toMs, information })
    weights.push(solved.map((value) => value * scale))
  })
  const all = new Float64Array(weights.length * size)
  weights.forEach((weight, j) => all.set(weight, j * size))
  return { rows, weights: all }
}

/** A draw of covariance I + sΛ + aVVᵀ. */
function drawFromModel(
  { components, size }: LateOnlyModel,
  s: number,
  a: number,
  normal: () => number,
  out: Float64Array,
  at: number,
): void {
  const { lambda, columns, rank } = components
  for (let i = 0; i < size; i++) out[at + i] = Math.sqrt(1 + s * lambda[i]) * normal()
  if (a === 0) return
  const root = Math.sqrt(a)
  for (let r = 0; r < rank; r++) {
    const u = root * normal()
    for (let i = 0; i < size; i++) out[at + i] += u * columns[r * size + i]
  }
}

function dot(a: Float64Array, b: Float64Array): number {
  let sum = 0
  for (let i = 0; i < a.length; i++) sum += a[i] * b[i]
  return sum
}
