import { simulatedFigures } from './simulated-score.ts'
import type { AnsweredMap, CellScore, MapCell } from './trade-off-map.ts'

/** The figures of one filter for one score, from a cell and a number of trials. */
export interface CellFigures {
  readonly index: number
  readonly cutoffIndex: number
  readonly rollOffIndex: number
  readonly cutoffHz: number
  readonly rollOff: number
  /** Why there are no figures at all: the filter cannot be realised or applied. */
  readonly error: string | null
  /** Noise-free score after − before, signed, locked interference included; null where a waveform has no such score. */
  readonly bias: number | null
  /** SD of the score of an average of N trials. */
  readonly noise: number | null
  /** √(bias² + noise²). */
  readonly totalError: number | null
  readonly precisionFactor: number | null
  /** null too where there is no effect in the window, and for latencies. */
  readonly equalTrialsFactor: number | null
  /** Change of a second score, the latency that the user watches; null where none is asked for. */
  readonly latencyShiftMs: number | null
  /** The largest part of the draws that had no such score, from 0 to 1; 0 for linear scores. */
  readonly missingShare: number
}

/**
 * Which waveform speaks for all: the worst of each figure on its own, the typical one (the median of each), or one of them.
 * Worst: largest |bias|, |shift|, noise and total error, smallest factors; a waveform without the score makes the worst case null.
 */
export type OverWaveforms = 'worst' | 'typical' | number

export interface FiguresQuestion {
  /** Index of the score, and of the latency whose shift is asked for (null for none). */
  readonly score: number
  readonly latency: number | null
  readonly trials: number
  readonly over: OverWaveforms
  /** Largest absolute value of each unfiltered waveform in the score's unit (`scoreReference`); null for latencies. */
  readonly largest: readonly (number | null)[]
}

/** An effect is none below this part of the waveform's largest absolute value. */
const EFFECT_SHARE = 0.2

/**
 * @throws RangeError for an unknown score or waveform, trials below 1, or a simulated score at another number of trials than it
 *   was simulated for.
 */
export function cellFigures(prepared: AnsweredMap, cell: MapCell, asked: FiguresQuestion): CellFigures {
  const { question } = prepared
  check(prepared, asked)
  const where = {
    index: cell.index,
    cutoffIndex: cell.cutoffIndex,
    rollOffIndex: cell.rollOffIndex,
    cutoffHz: question.cutoffsHz[cell.cutoffIndex],
    rollOff: question.rollOffs[cell.rollOffIndex],
  }
  if (cell.error !== null) return { ...where, error: cell.error, ...NOTHING }
  const before = prepared.before[asked.score]
  const after = cell.scores[asked.score]
  const count = question.waveforms.length
  const each = Array.from({ length: count }, (_, w) => figuresOf(before, after, w, asked))
  const { over } = asked
  const shifts =
    asked.latency === null
      ? null
      : each.map((_, w) =>
          number(cell.scores[asked.latency as number].after[w] - prepared.before[asked.latency as number].after[w]),
        )
  return {
    ...where,
    error: null,
    bias: combined(
      each.map((f) => f.bias),
      over,
      Math.abs,
    ),
    noise: combined(
      each.map((f) => f.noise),
      over,
      Math.abs,
    ),
    totalError: combined(
      each.map((f) => f.totalError),
      over,
      Math.abs,
    ),
    precisionFactor: combined(
      each.map((f) => f.precisionFactor),
      over,
      (value) => -value,
    ),
    equalTrialsFactor: combinedEffects(
      each.map((f) => f.equalTrialsFactor),
      over,
    ),
    latencyShiftMs: shifts === null ? null : combined(shifts, over, Math.abs),
    missingShare: Math.max(...(typeof over === 'number' ? [each[over]] : each).map((f) => f.missingShare)),
  }
}

const NOTHING = {
  bias: null,
  noise: null,
  totalError: null,
  precisionFactor: null,
  equalTrialsFactor: null,
  latencyShiftMs: null,
  missingShare: 0,
} as const

function figuresOf(before: CellScore, after: CellScore, w: number, asked: FiguresQuestion) {
  const bias = number(after.after[w] + after.locked - before.after[w])
  const varianceAfter = varianceOf(after, w, asked.trials)
  const varianceBefore = varianceOf(before, w, asked.trials)
  const noise = varianceAfter === null ? null : Math.sqrt(varianceAfter)
  const precisionFactor =
    varianceAfter === null || varianceBefore === null ? null : number(varianceBefore / varianceAfter)
  const largest = asked.largest[w]
  const effect = Math.abs(before.after[w])
  const shown = largest !== null && effect > 0 && effect >= EFFECT_SHARE * largest
  const ratio = after.after[w] / before.after[w]
  return {
    bias,
    noise,
    totalError: bias === null || noise === null ? null : Math.hypot(bias, noise),
    precisionFactor,
    equalTrialsFactor: precisionFactor === null || !shown ? null : number(precisionFactor * ratio * ratio),
    missingShare: missingOf(after, w),
  }
}

function varianceOf(score: CellScore, w: number, trials: number): number | null {
  if (score.varianceOfOneTrial !== null) return score.varianceOfOneTrial / trials
  const figures = score.simulated ? simulatedFigures(score.simulated[w], null, null) : null
  return figures === null ? null : figures.noise.value ** 2
}

function missingOf(score: CellScore, w: number): number {
  const sums = score.simulated?.[w]
  if (!sums || sums.found + sums.missing === 0) return Number.isNaN(score.after[w]) ? 1 : 0
  return sums.missing / (sums.found + sums.missing)
}

/** The value that is worst or typical by its badness; null where any waveform has none. */
function combined(
  values: readonly (number | null)[],
  over: OverWaveforms,
  badness: (value: number) => number,
): number | null {
  if (typeof over === 'number') return values[over]
  const known = values.filter((value) => value !== null)
  if (known.length < values.length || known.length === 0) return null
  const sorted = known.sort((a, b) => badness(a) - badness(b))
  // the lower of two middle ones: a value that one of the waveforms has
  return over === 'worst' ? sorted[sorted.length - 1] : sorted[(sorted.length - 1) >> 1]
}

/** Waveforms without an effect in the window say nothing about how well it can be told. */
function combinedEffects(values: readonly (number | null)[], over: OverWaveforms): number | null {
  if (typeof over === 'number') return values[over]
  return combined(
    values.filter((value) => value !== null),
    over,
    (value) => -value,
  )
}

const number = (value: number) => (Number.isFinite(value) ? value : null)

function check({ question }: AnsweredMap, { score, latency, trials, over, largest }: FiguresQuestion): void {
  const count = question.scores.length
  for (const [name, index] of [
    ['score', score],
    ['latency', latency ?? 0],
  ] as const) {
    if (!Number.isInteger(index) || index < 0 || index >= count) {
      throw new RangeError(`${name} must be one of ${count} scores, counted from 0, was ${index}`)
    }
  }
  if (!(trials >= 1) || !Number.isFinite(trials)) throw new RangeError(`trials must be at least 1, was ${trials}`)
  const { score: asked, noise } = question.scores[score]
  const linear = asked.kind === 'mean' || asked.kind === 'moment'
  if (!linear && noise === 'with noise' && trials !== question.trials) {
    throw new RangeError(`trials must be ${question.trials}, which the ${asked.kind} was simulated for, was ${trials}`)
  }
  const waveforms = question.waveforms.length
  if (typeof over === 'number' && !(Number.isInteger(over) && over >= 0 && over < waveforms)) {
    throw new RangeError(`over must be one of ${waveforms} waveforms, counted from 0, was ${over}`)
  }
  if (largest.length !== waveforms) {
    throw new RangeError(`largest must hold one value per waveform (${waveforms}), had ${largest.length}`)
  }
}
