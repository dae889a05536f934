import type { FigureId, Limit, Measure } from '../erp/figure.ts'
import { type NoScore, type Score, scoreOf, scoreUnit } from '../erp/score.ts'
import { checkValues, samplesInWindow, type TimeWindow } from '../erp/time-axis.ts'

/**
 * The readout's rows: what a chain did to a waveform, as plain data. Every row has a value before and after (or the reason why
 * there is none), their difference, and that difference in per cent.
 */

/** The question that a row answers. */
export type FigureGroup = 'score' | 'size' | 'time' | 'false activity'
/** Why a value is missing. */
export type NoValue = NoScore | 'onset not given' | 'nothing before the onset'

export interface FidelityRow {
  id: FigureId
  group: FigureGroup
  /** What is measured, and where; the page puts it into words. */
  label: {
    figure: Score['kind'] | 'false-deflection'
    window: TimeWindow
    /** Of area and onset latency. */
    fraction?: number
    /** Moment of the false deflection. */
    atMs?: number
  }
  unit: 'µV' | 'ms' | 'µV·s'
  before: number | NoValue
  after: number | NoValue
  /** after − before; null where either is missing. */
  change: number | null
  /** 100·change/`percentOf`: a shrinking is negative for negative components too, where it is of before. null for latencies, and where either value is missing. */
  percent: number | null
  /** 'before', or 'largest' where |before| is under 20 % of the waveform's largest absolute value. */
  percentOf: 'before' | 'largest' | null
}

export interface FidelityInput {
  timesMs: Float64Array
  /** Unfiltered, baseline-corrected, µV. */
  before: Float64Array
  /** Filtered, baseline-corrected, µV. */
  after: Float64Array
  score: Score
  measure: Measure
  /** The waveform's onset: by `onsetOfBuilt` for a built one, by the user for a loaded one; null until it is given. */
  onsetMs: number | 'no onset' | null
}

/** Under this part of the largest absolute value per cent of before says nothing. */
const SMALL_SHARE = 0.2

/**
 * The rows of the readout, in its order (the noise row comes from `noiseRow`).
 *
 * Per cent of an area that is small beside the waveform is taken of the largest value times the window's duration.
 *
 * @throws RangeError for values that are not finite, or windows that leave the epoch or hold too few samples.
 */
export function fidelityRows(input: FidelityInput): FidelityRow[] {
  const { score, measure } = input
  checkValues(input.before, input.timesMs)
  checkValues(input.after, input.timesMs)
  const { polarity } = measure
  const largest = largestAbsolute(input.before)
  const row = (id: FigureId, group: FigureGroup, of: Score) => scoreRow(input, id, group, of, largest)
  return [
    row('score', 'score', score),
    row('mean-amplitude', 'size', { kind: 'mean', ...measure.mean, polarity }),
    row('peak-amplitude', 'size', { kind: 'peak-amplitude', ...measure.peak, polarity }),
    row('signed-area', 'size', { kind: 'area', ...measure.peak, polarity }),
    row('peak-latency', 'time', { kind: 'peak-latency', ...measure.peak, polarity }),
    row('area-latency', 'time', { kind: 'area-latency', ...measure.peak, polarity, fraction: 0.5 }),
    row('onset-latency', 'time', { kind: 'onset-latency', ...measure.peak, polarity, fraction: 0.5 }),
    falseDeflectionRow(input, largest),
  ]
}

/** The largest absolute value of a waveform, µV: what small changes are measured against. */
export function largestAbsolute(values: Float64Array): number {
  let largest = 0
  for (const value of values) largest = Math.max(largest, Math.abs(value))
  return largest
}

/**
 * The waveform's largest absolute value in a score's unit: itself for µV, times the window's duration for an area; null for
 * latencies, which have no size.
 *
 * @param largestUv as `largestAbsolute`.
 */
export function scoreReference(score: Score, largestUv: number): number | null {
  const unit = scoreUnit(score.kind)
  if (unit === 'ms') return null
  return unit === 'µV' ? largestUv : (largestUv * (score.toMs - score.fromMs)) / 1000
}

function scoreRow(input: FidelityInput, id: FigureId, group: FigureGroup, score: Score, largest: number): FidelityRow {
  const { timesMs } = input
  const fraction = score.kind === 'area-latency' || score.kind === 'onset-latency' ? (score.fraction ?? 0.5) : undefined
  return {
    id,
    group,
    label: {
      figure: score.kind,
      window: { fromMs: score.fromMs, toMs: score.toMs },
      ...(fraction === undefined ? {} : { fraction }),
    },
    unit: scoreUnit(score.kind),
    ...compare(
      scoreOf(input.before, timesMs, score),
      scoreOf(input.after, timesMs, score),
      scoreReference(score, largest),
    ),
  }
}

/**
 * The strongest false deflection: y − x where |y − x| is largest between the epoch's start and the onset. x and y at that
 * moment are the row's before and after.
 */
function falseDeflectionRow(input: FidelityInput, largest: number): FidelityRow {
  const { timesMs, before, after, onsetMs } = input
  const from = timesMs[0]
  const shared = { id: 'false-deflection', group: 'false activity', unit: 'µV' } as const
  const missing = (reason: NoValue, toMs: number): FidelityRow => ({
    ...shared,
    label: { figure: 'false-deflection', window: { fromMs: from, toMs } },
    before: reason,
    after: reason,
    change: null,
    percent: null,
    percentOf: null,
  })
  const end = timesMs[timesMs.length - 1]
  if (onsetMs === null) return missing('onset not given', end)
  if (onsetMs === 'no onset') return missing('no onset', end)
  if (!Number.isFinite(onsetMs)) throw new RangeError(`onsetMs must be a finite number, was ${onsetMs}`)
  // an onset at the first sample, or before it, leaves no sample that came before any activity
  if (onsetMs <= from) return missing('nothing before the onset', onsetMs)
  const { first, last } = samplesInWindow(
    timesMs,
    { fromMs: from, toMs: Math.min(onsetMs, end) },
    'time before the onset',
  )
  let at = first
  for (let i = first; i <= last; i++) if (Math.abs(after[i] - before[i]) > Math.abs(after[at] - before[at])) at = i
  return {
    ...shared,
    label: { figure: 'false-deflection', window: { fromMs: from, toMs: onsetMs }, atMs: timesMs[at] },
    ...compare(before[at], after[at], largest),
  }
}

function compare(before: number | NoValue, after: number | NoValue, reference: number | null) {
  if (typeof before === 'string' || typeof after === 'string') {
    return { before, after, change: null, percent: null, percentOf: null }
  }
  const change = after - before
  if (reference === null || reference === 0) return { before, after, change, percent: null, percentOf: null }
  const small = Math.abs(before) < SMALL_SHARE * reference
  const percent = (100 * change) / (small ? reference : before)
  return { before, after, change, percent, percentOf: small ? ('largest' as const) : ('before' as const) }
}

/** Whether a row keeps a limit. */
export interface Judgement {
  /** null where it cannot be said: there is no value before. */
  kept: boolean | null
  /** |change| in multiples of the limit; null where a value is missing or the limit is 0 and the change is not. */
  multiples: number | null
}

/**
 * Holds a row against the largest change that the user accepts.
 *
 * A figure that existed before and has none after (its peak is gone) is over every limit. A change equal to the limit is kept.
 *
 * @throws RangeError for a limit that is negative or not a number, or in another unit than the row's (per cent is allowed
 *   where the row has it).
 */
export function judge(row: FidelityRow, limit: Limit): Judgement {
  if (!(limit.value >= 0)) throw new RangeError(`limit.value must be a number of at least 0, was ${limit.value}`)
  if (limit.unit !== row.unit && !(limit.unit === '%' && row.unit !== 'ms')) {
    throw new RangeError(
      `limit.unit must be ${row.unit}${row.unit === 'ms' ? '' : ' or %'} for ${row.id}, was ${limit.unit}`,
    )
  }
  if (typeof row.before === 'string') return { kept: null, multiples: null }
  if (typeof row.after === 'string') return { kept: false, multiples: null }
  const change = limit.unit === '%' ? row.percent : row.change
  // per cent of a waveform that is 0 throughout: only no change at all is within any limit
  const size = change === null ? (row.change === 0 ? 0 : Infinity) : Math.abs(change)
  const multiples = size === 0 ? 0 : size / limit.value
  // 0.1 + 0.2 against 0.3 is a matter of rounding, not of the filter
  return { kept: multiples <= 1 + 1e-9, multiples: Number.isFinite(multiples) ? multiples : null }
}
