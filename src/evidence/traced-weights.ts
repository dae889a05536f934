import { type Baseline, correctBaseline } from '../erp/baseline.ts'
import { findPeak } from '../erp/peak.ts'
import { type NoScore, type Score, scoreOf, scoreWeights } from '../erp/score.ts'
import { stepMs, type TimeWindow } from '../erp/time-axis.ts'

/** 'after' is the value of the filtered waveform, 'change' that value minus the same of the unfiltered one. */
export type TracedOf = 'after' | 'change'

/** What is traced, as weights: value = Σ onAfter·y − Σ onBefore·x, y filtered and x unfiltered. */
export interface Traced {
  readonly score: Score
  readonly of: TracedOf
  readonly unit: 'µV' | 'µV·s'
  /** Weights on the filtered samples of the epoch, baseline included. */
  readonly onAfter: Float64Array
  /** Weights on its unfiltered samples; null for 'after'. */
  readonly onBefore: Float64Array | null
  /**
   * What was held fixed to make a weighted sum of it: a peak's moment, the moment of a latency (the value traced is then the
   * amplitude at that moment, not the latency), the samples on the stated side of an area; null for a mean and a moment, which are linear.
   */
  readonly heldFixed: { readonly what: 'peak' | 'latency' | 'area'; readonly atMs: number | null } | null
  /** Where the value is measured: the score's window, or the surroundings of its moment, ± 25 ms. */
  readonly window: TimeWindow
  /** The moment of a value, a peak or a latency; null for a mean and an area. */
  readonly atMs: number | null
}

export interface NotTraced {
  readonly missing: NoScore
  readonly where: 'before' | 'after'
}

export interface TracedInput {
  score: Score
  of: TracedOf
  baseline: Baseline
  timesMs: Float64Array
  /** Unfiltered and filtered waveform on the epoch, µV, baseline-corrected or not. */
  before: Float64Array
  after: Float64Array
}

/** A moment's own window reaches this far to either side of it. */
const MOMENT_MS = 25

/**
 * The weights of a value that is to be traced.
 *
 * Any moment of the time figure is a score of kind 'moment'; the strongest false deflection is the 'change' of the moment at which it lies.
 * The change of a peak or an area is that of the readout: each of the two waveforms keeps its own moment, or its own
 * samples.
 *
 * @returns  the weights, or which of the two waveforms has no such score.
 * @throws RangeError as `scoreOf`.
 */
export function tracedWeights(input: TracedInput): Traced | NotTraced {
  const { score, of, baseline, timesMs } = input
  const after = correctBaseline(input.after, timesMs, baseline)
  const found = scoreOf(after, timesMs, score)
  if (typeof found === 'string') return { missing: found, where: 'after' }
  const shared = { score, of } as const
  switch (score.kind) {
    case 'mean':
    case 'moment': {
      const w = scoreWeights(score, baseline, timesMs)
      const atMs = score.kind === 'moment' ? score.fromMs : null
      const window = atMs === null ? { fromMs: score.fromMs, toMs: score.toMs } : around(atMs, timesMs)
      return { ...shared, unit: 'µV', onAfter: w, onBefore: of === 'change' ? w : null, heldFixed: null, window, atMs }
    }
    case 'peak-latency':
    case 'area-latency':
    case 'onset-latency': {
      const atMs = Math.min(timesMs[timesMs.length - 1], Math.max(timesMs[0], found))
      const w = scoreWeights({ ...score, kind: 'moment', fromMs: atMs, toMs: atMs }, baseline, timesMs)
      const heldFixed = { what: 'latency', atMs } as const
      const onBefore = of === 'change' ? w : null
      return { ...shared, unit: 'µV', onAfter: w, onBefore, heldFixed, window: around(atMs, timesMs), atMs }
    }
    case 'peak-amplitude':
    case 'area': {
      const onAfter = scoreWeights(score, baseline, timesMs, after)
      let onBefore: Float64Array | null = null
      if (of === 'change') {
        const before = correctBaseline(input.before, timesMs, baseline)
        const earlier = scoreOf(before, timesMs, score)
        if (typeof earlier === 'string') return { missing: earlier, where: 'before' }
        onBefore = scoreWeights(score, baseline, timesMs, before)
      }
      if (score.kind === 'area') {
        const heldFixed = { what: 'area', atMs: null } as const
        const window = { fromMs: score.fromMs, toMs: score.toMs }
        return { ...shared, unit: 'µV·s', onAfter, onBefore, heldFixed, window, atMs: null }
      }
      const peak = findPeak(after, timesMs, score, score.polarity)
      const atMs = peak === 'no peak' ? score.fromMs : peak.latencyMs
      const heldFixed = { what: 'peak', atMs } as const
      return { ...shared, unit: 'µV', onAfter, onBefore, heldFixed, window: around(atMs, timesMs), atMs }
    }
  }
}

/** Whether there is something to trace. */
export function isTraced(found: Traced | NotTraced): found is Traced {
  return 'onAfter' in found
}

function around(atMs: number, timesMs: Float64Array): TimeWindow {
  const reach = Math.max(MOMENT_MS, stepMs(timesMs))
  return { fromMs: Math.max(timesMs[0], atMs - reach), toMs: Math.min(timesMs[timesMs.length - 1], atMs + reach) }
}
