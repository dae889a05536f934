/** Where the score of the filtered waveform is marked in the time figure, and its number in words. */
import type { Score } from '../erp/score.ts'
import type { FidelityRow } from '../evidence/fidelity.ts'
import { fixed } from '../words/number.ts'
import { sampleNear, type TimeAxis } from './time-axis.ts'

export type ScoreMark =
  /** A line across the score window at the mean. */
  | { kind: 'level'; fromMs: number; toMs: number; uv: number }
  /** A dot: a peak, a value at one moment. */
  | { kind: 'point'; atMs: number; uv: number }
  /** An upright line through the curve: a latency. */
  | { kind: 'latency'; atMs: number; uv: number }

/** "−1.19 µV", "398 ms", "0.412 µV·s", or why there is no number. */
export function scoreText(value: FidelityRow['after'], unit: FidelityRow['unit']): string {
  if (typeof value !== 'number') return value
  if (unit === 'ms') return `${fixed(value, Math.abs(value - Math.round(value)) < 0.05 ? 0 : 1)} ms`
  return `${fixed(value, unit === 'µV' ? 2 : 3)} ${unit}`
}

/**
 * @param value  of the score, as the readout has it.
 * @param after  the filtered waveform on the epoch, µV.
 * @returns null for an area, which is no place in the figure, and where the score has no value.
 */
export function scoreMark(
  score: Score,
  value: FidelityRow['after'],
  after: Float64Array,
  axis: TimeAxis,
): ScoreMark | null {
  if (typeof value !== 'number') return null
  switch (score.kind) {
    case 'area':
      return null
    case 'mean':
      return { kind: 'level', fromMs: score.fromMs, toMs: score.toMs, uv: value }
    case 'moment':
      return { kind: 'point', atMs: score.fromMs, uv: value }
    case 'peak-amplitude':
      return { kind: 'point', atMs: peakMs(score, value, after, axis), uv: value }
    default:
      return { kind: 'latency', atMs: value, uv: valueAt(after, axis, value) }
  }
}

/** The turning point in the window whose height is that of the peak; the window's nearest sample where none turns. */
function peakMs(score: Score, uv: number, after: Float64Array, axis: TimeAxis): number {
  const sign = score.polarity === 'positive' ? 1 : -1
  let best = -1
  let turns = false
  for (let i = sampleNear(axis, score.fromMs); i <= sampleNear(axis, score.toMs); i++) {
    const turning =
      i > 0 && i < after.length - 1 && sign * after[i] >= sign * after[i - 1] && sign * after[i] >= sign * after[i + 1]
    if (turns && !turning) continue
    if (best < 0 || (turning && !turns) || Math.abs(after[i] - uv) < Math.abs(after[best] - uv)) best = i
    turns ||= turning
  }
  return axis.firstMs + Math.max(0, best) * axis.stepMs
}

/** The curve's height between samples, by a straight line; that of the nearest sample outside the epoch. */
export function valueAt(values: Float64Array, axis: TimeAxis, ms: number): number {
  const place = Math.max(0, Math.min(values.length - 1, (ms - axis.firstMs) / axis.stepMs))
  const before = Math.floor(place)
  const part = place - before
  return part === 0 ? values[before] : values[before] * (1 - part) + values[before + 1] * part
}
