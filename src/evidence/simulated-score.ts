import { correctBaseline, type Baseline } from '../erp/baseline.ts'
import type { NoiseSpec } from '../erp/noise.ts'
import { type NoScore, type Score, scoreOf } from '../erp/score.ts'
import { samplesInWindow, stepMs } from '../erp/time-axis.ts'
import { seededRandom } from '../erp/seeded-random.ts'
import type { Extent } from '../filter/apply-chain.ts'
import type { Chain } from '../filter/chain.ts'
import { drawFilteredNoise, type FilteredNoise, filteredNoise, type NoisePassed, noisePath } from './filtered-noise.ts'

/**
 * The noise of scores that are no weighted sums (peaks, areas, latencies), by drawing it: a filtered noise-free waveform plus
 * filtered noise of an average of N trials, scored, many times over. Everything is seeded; batches can be added in any order.
 */

/** What is kept of many draws: sums of powers of (value − shift), so that batches are added by adding. */
export interface SimulatedSums {
  /** The noise-free score where there is one: the digits stay in the differences. */
  readonly shift: number
  /** Draws that had a score. */
  readonly found: number
  /** Draws without: no peak, no area, no onset. */
  readonly missing: number
  readonly powers: readonly [number, number, number, number]
}

export const emptySums = (shift: number): SimulatedSums => ({ shift, found: 0, missing: 0, powers: [0, 0, 0, 0] })

/** Adds one draw. */
export function addDraw(sums: SimulatedSums, value: number | NoScore): SimulatedSums {
  if (typeof value === 'string') return { ...sums, missing: sums.missing + 1 }
  const d = value - sums.shift
  const [a, b, c, e] = sums.powers
  return { ...sums, found: sums.found + 1, powers: [a + d, b + d * d, c + d * d * d, e + d * d * d * d] }
}

/** @throws RangeError for sums about different shifts, which cannot be added. */
export function mergeSums(first: SimulatedSums, second: SimulatedSums): SimulatedSums {
  if (first.shift !== second.shift) {
    throw new RangeError(`sums must be about one shift to be added, were about ${first.shift} and ${second.shift}`)
  }
  const [a, b, c, d] = first.powers
  const [e, f, g, h] = second.powers
  return {
    shift: first.shift,
    found: first.found + second.found,
    missing: first.missing + second.missing,
    powers: [a + e, b + f, c + g, d + h],
  }
}

/** A number found by simulation, and how far it may be off by chance (one standard error). */
export interface Estimate {
  readonly value: number
  readonly standardError: number
}

export interface SimulatedFigures {
  /** Score of the noise-free waveform after − before; null where either has none. Exact. */
  readonly bias: number | null
  /** What noise itself moves the mean score by, over the noise-free one after: a peak in noise is too large. */
  readonly noiseShift: Estimate | null
  /** Standard deviation of the score of an average of N trials. */
  readonly noise: Estimate
  /** √(bias² + noise²), as for linear scores. */
  readonly totalError: Estimate | null
  /** Root mean square distance from the noise-free score before, the noise's own shift included. */
  readonly distance: Estimate | null
  readonly draws: number
  /** Draws that had no such score; they are in no other figure. */
  readonly missing: number
}

/**
 * @param before noise-free score before the chain; null where there is none.
 * @param after  noise-free score after it; null where there is none.
 * @returns null for fewer than 2 draws with a score.
 */
export function simulatedFigures(
  sums: SimulatedSums,
  before: number | null,
  after: number | null,
): SimulatedFigures | null {
  const { found: n, missing, shift } = sums
  if (n < 2) return null
  const [m1, r2, r3, r4] = sums.powers.map((power) => power / n)
  const central2 = Math.max(0, r2 - m1 * m1)
  const central4 = r4 - 4 * m1 * r3 + 6 * m1 * m1 * r2 - 3 * m1 ** 4
  const variance = (central2 * n) / (n - 1)
  const sd = Math.sqrt(variance)
  // of a variance: (μ₄ − μ₂²)/n; of its root half as much, relatively
  const errorOfVariance = Math.sqrt(Math.max(0, central4 - central2 * central2) / n)
  const root = (square: number, error: number): Estimate => {
    const value = Math.sqrt(square)
    return { value, standardError: value > 0 ? error / (2 * value) : 0 }
  }
  const bias = before === null || after === null ? null : after - before
  let distance: Estimate | null = null
  if (before !== null) {
    // moments of (value − before)² from those about the shift
    const d = shift - before
    const square = r2 + 2 * d * m1 + d * d
    const fourth = r4 + 4 * d * r3 + 6 * d * d * r2 + 4 * d ** 3 * m1 + d ** 4
    distance = root(Math.max(0, square), Math.sqrt(Math.max(0, fourth - square * square) / n))
  }
  return {
    bias,
    noiseShift: after === null ? null : { value: shift + m1 - after, standardError: sd / Math.sqrt(n) },
    noise: root(variance, errorOfVariance),
    totalError: bias === null ? null : root(bias * bias + variance, errorOfVariance),
    distance,
    draws: n + missing,
    missing,
  }
}

export interface SimulationQuestion {
  readonly chain: Chain
  readonly extent: Extent
  readonly noise: NoiseSpec
  readonly noisePassed: NoisePassed
  readonly trials: number
  readonly timesMs: Float64Array
  readonly baseline: Baseline
  readonly score: Score
  /** Noise-free filtered waveform on the epoch, baseline-corrected or not, with interference that is locked to the event. */
  readonly after: Float64Array
  readonly seed: number
}

/** A simulation made ready: keep it between batches. */
export interface ScoreSimulation {
  readonly question: SimulationQuestion
  readonly noise: FilteredNoise
}

/** Where a simulation stands. Plain data, so that a worker can hand it over and another go on. */
export interface SimulationState {
  /** Batches done, from 0: batch b draws from stream b of the seed. */
  readonly batches: number
  readonly sums: SimulatedSums
}

/** Draws of one batch. */
export const BATCH_DRAWS = 50

/** @throws RangeError as `noiseSource`, `scoreOf`; for trials below 1. */
export function scoreSimulation(question: SimulationQuestion): ScoreSimulation {
  const { chain, extent, noise, noisePassed, timesMs, trials } = question
  if (!(trials >= 1) || !Number.isFinite(trials)) throw new RangeError(`trials must be at least 1, was ${trials}`)
  const path = noisePath(chain, extent, noisePassed)
  return { question, noise: filteredNoise(path, noise, chain.samplingRateHz, timesMs.length) }
}

/** Before the first batch. Throws as `scoreOf`. */
export function simulationStart({ question }: ScoreSimulation): SimulationState {
  const { after, timesMs, baseline, score } = question
  const clean = scoreOf(correctBaseline(after, timesMs, baseline), timesMs, score)
  return { batches: 0, sums: emptySums(typeof clean === 'number' ? clean : 0) }
}

/** One batch more: 50 draws. The same state always gives the same next one. */
export function simulateBatch(simulation: ScoreSimulation, state: SimulationState): SimulationState {
  const { question, noise } = simulation
  const random = seededRandom(question.seed, state.batches)
  let { sums } = state
  for (let pair = 0; pair < BATCH_DRAWS / 2; pair++) {
    for (const drawn of drawFilteredNoise(noise, random, question.trials)) {
      sums = addDraw(sums, scoreWithNoise(question.after, drawn, question.timesMs, question.baseline, question.score))
    }
  }
  return { batches: state.batches + 1, sums }
}

/** The score of a waveform with noise on it. */
export function scoreWithNoise(
  waveform: Float64Array,
  noise: Float64Array,
  timesMs: Float64Array,
  baseline: Baseline,
  score: Score,
): number | NoScore {
  const noisy = waveform.map((value, i) => value + noise[i])
  return scoreOf(correctBaseline(noisy, timesMs, baseline), timesMs, score)
}

/** A peak's neighbours are looked at this far outside its window, with room to spare. */
const MARGIN_MS = 25

/**
 * The samples from … to − 1 that a score looks at: many draws on a long epoch need not pass over all of it. Only a peak's plateaus,
 * which noise has none of, are judged by the range of the whole.
 *
 * @throws RangeError for a window that leaves the epoch.
 */
export function scoreStretch(score: Score, timesMs: Float64Array): { from: number; to: number } {
  const { first, last } = samplesInWindow(timesMs, score, 'score window')
  const margin = Math.ceil(MARGIN_MS / stepMs(timesMs)) + 2
  return {
    from: score.kind === 'onset-latency' ? 0 : Math.max(0, first - margin),
    to: Math.min(timesMs.length, last + 1 + margin),
  }
}
