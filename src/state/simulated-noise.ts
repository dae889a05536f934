/** The noise of a score that is no weighted sum, by seeded simulation: what the readout asks, and the worker's part of the answer. */
import { type Score, scoreLinearity, scoreUnit } from '../erp/score.ts'
import type { Baseline } from '../erp/baseline.ts'
import type { NoiseSpec } from '../erp/noise.ts'
import type { NoisePassed } from '../evidence/filtered-noise.ts'
import {
  BATCH_DRAWS,
  type Estimate,
  type ScoreSimulation,
  scoreSimulation,
  simulateBatch,
  simulatedFigures,
  simulationStart,
  type SimulationState,
} from '../evidence/simulated-score.ts'
import type { Extent } from '../filter/apply-chain.ts'
import { designChain } from '../filter/chain.ts'
import type { StageSpec } from '../filter/stage.ts'
import { chosenNoise } from './chosen-noise.ts'
import type { Evaluation } from './evaluation.ts'
import type { RecordedData } from './recorded-data.ts'
import { DIFFERENCE, type Workspace } from './workspace.ts'

export interface NoiseQuestion {
  readonly chain: readonly StageSpec[]
  readonly samplingRateHz: number
  readonly extent: Extent
  readonly noise: NoiseSpec
  readonly passed: NoisePassed
  /** N as the draws see it: of a difference half the trials of one condition. */
  readonly trials: number
  readonly timesMs: Float64Array
  readonly baseline: Baseline
  readonly score: Score
  /** Noise-free, baseline-corrected, µV. */
  readonly before: Float64Array
  readonly after: Float64Array
}

/** Standard deviations of the score of an average, each with the simulation's own standard error. */
export interface SimulatedNoise {
  readonly unit: 'µV' | 'ms' | 'µV·s'
  readonly before: Estimate
  readonly after: Estimate
  /** Variance before over variance after. */
  readonly precisionFactor: Estimate | null
  readonly draws: number
  /** Draws of the filtered waveform without such a score; they are in no number. */
  readonly missing: number
}

/** Draws after which the standard error of an SD is about 1 %. */
export const NOISE_DRAWS = 4000
const SEED = 1

/**
 * What is simulated for the readout: latencies, and what has a formula only while its peak or its side is held fixed. Null where the noise of the
 * score has an exact formula, or where there is no such score.
 *
 * @param workspace the one that the evaluation belongs to.
 */
export function noiseQuestion(
  workspace: Workspace,
  evaluation: Evaluation,
  data: RecordedData | null,
): NoiseQuestion | null {
  const { score, trials, shown, baseline, chain, extent, source } = workspace
  const { rows, curves, chosen, timesMs, samplingRateHz } = evaluation
  if (scoreLinearity(score.kind) === 'linear') return null
  if (typeof rows[0].before !== 'number' || typeof rows[0].after !== 'number') return null
  // two single trials have a difference, but it is no average whose noise could be drawn
  const drawn = shown.chosen === DIFFERENCE ? trials / 2 : trials
  if (drawn < 1) return null
  const { noise, passed } = chosenNoise(workspace, data)
  const { before, after } = curves[chosen]
  return {
    ...{ chain, samplingRateHz, noise, passed, timesMs, baseline, score, before, after },
    extent: source.kind === 'recorded' ? 'epochs' : extent,
    trials: drawn,
  }
}

interface Run {
  readonly simulation: ScoreSimulation
  state: SimulationState
}

let ready: { key: string; before: Run; after: Run } | null = null

/**
 * Goes on with a simulation until the time is up, at least one batch of 50 draws each.
 *
 * @param key      of the question, so that the next call finds it where it was.
 * @param question null where the caller believes it known; asked for again (null returned) where it is not.
 * @throws RangeError as `scoreSimulation`.
 */
export function noiseSlice(key: string, question: NoiseQuestion | null, budgetMs: number): SimulatedNoise | null {
  if (ready?.key !== key) {
    ready = null
    if (!question) return null
    ready = { key, ...prepared(question) }
  }
  const { before, after } = ready
  const started = Date.now()
  do {
    before.state = simulateBatch(before.simulation, before.state)
    after.state = simulateBatch(after.simulation, after.state)
  } while (Date.now() - started < budgetMs && after.state.batches * BATCH_DRAWS < NOISE_DRAWS)
  return figuresOf(before, after)
}

function prepared(question: NoiseQuestion) {
  const { chain, samplingRateHz, extent, noise, passed, trials, timesMs, baseline, score } = question
  const make = (specs: readonly StageSpec[], waveform: Float64Array) => {
    const simulation = scoreSimulation({
      chain: designChain(specs, samplingRateHz),
      ...{ extent, noise, trials, timesMs, baseline, score },
      noisePassed: passed,
      after: waveform,
      seed: SEED,
    })
    return { simulation, state: simulationStart(simulation) }
  }
  return {
    // the waveform before has passed what is in the data, and so has its noise
    before: make(
      chain.filter(({ inData }) => inData === true),
      question.before,
    ),
    after: make(chain, question.after),
  }
}

/** Null while too few draws had a score. */
function figuresOf(before: Run, after: Run): SimulatedNoise | null {
  const { score } = after.simulation.question
  const first = simulatedFigures(before.state.sums, null, null)
  const second = simulatedFigures(after.state.sums, null, null)
  if (!first || !second) return null
  const ratio = (first.noise.value / second.noise.value) ** 2
  const relative =
    2 * Math.hypot(first.noise.standardError / first.noise.value, second.noise.standardError / second.noise.value)
  return {
    unit: scoreUnit(score.kind),
    before: first.noise,
    after: second.noise,
    precisionFactor: Number.isFinite(ratio * relative) ? { value: ratio, standardError: ratio * relative } : null,
    draws: second.draws,
    missing: second.missing,
  }
}
