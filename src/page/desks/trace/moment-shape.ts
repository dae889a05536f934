/** What the figure by moment draws, as numbers: the density of shares on its axis, cut into stretches. */
import type { MomentRow, MomentTrace } from '../../../evidence/trace-by-moment.ts'
import { shareDensity } from '../../../state/trace-facts.ts'
import type { TimeAxis } from '../../time-axis.ts'

/** Values at samples of the axis, the first of them at `startMs`. */
export interface Density {
  readonly startMs: number
  readonly stepMs: number
  readonly values: Float64Array
}

/** The density of shares, per 100 ms, on the axis of the time figure; zero where the account holds nothing more. */
export function densityOnAxis(trace: MomentTrace, axis: TimeAxis): Density {
  const margin = Math.round((axis.firstMs - axis.fromMs) / axis.stepMs)
  const all = shareDensity(trace)
  const values = new Float64Array(axis.samples + 2 * margin)
  for (let i = 0; i < values.length; i++) values[i] = all[i - margin - trace.from] ?? 0
  return { startMs: axis.firstMs - margin * axis.stepMs, stepMs: axis.stepMs, values }
}

/** The part of the axis that a row stands for; null for a row that is no moments, or lies outside the axis. */
export function placeOf(row: MomentRow, axis: TimeAxis): { fromMs: number; toMs: number } | null {
  const fromMs = Math.max(axis.fromMs, row.fromMs)
  const toMs = Math.min(axis.toMs, row.toMs)
  return toMs > fromMs ? { fromMs, toMs } : null
}

/** The stretch of the density between two moments, its ends interpolated so that neighbouring stretches meet. */
export function cutOut({ startMs, stepMs, values }: Density, fromMs: number, toMs: number) {
  const last = values.length - 1
  const at = (ms: number) => Math.max(0, Math.min(last, (ms - startMs) / stepMs))
  const valueAt = (place: number) => {
    const before = Math.floor(place)
    const part = place - before
    return part === 0 ? values[before] : values[before] * (1 - part) + values[before + 1] * part
  }
  const first = at(fromMs)
  const end = at(toMs)
  const places = [first]
  for (let i = Math.floor(first) + 1; i < end; i++) places.push(i)
  places.push(end)
  return {
    xs: Float64Array.from(places, (place) => startMs + place * stepMs),
    ys: Float64Array.from(places, valueAt),
  }
}

/** The largest share in absolute value of the rows that have a place in the figure. */
export function largestShare(rows: readonly MomentRow[]): number {
  return rows.reduce((most, { share }) => Math.max(most, Math.abs(share)), 0)
}

/** A row counts as large from this part of the largest share on. */
const LARGE = 0.25

export const isLarge = (row: MomentRow, largest: number) => largest > 0 && Math.abs(row.share) >= LARGE * largest

/** How strongly a stretch is tinted: by the size of its share. */
export function tintOf(row: MomentRow, largest: number): number {
  return largest === 0 ? 0.08 : 0.08 + 0.32 * (Math.abs(row.share) / largest)
}

/** Rows that get a label in the figure: the largest two, and the score window's own if it is one stretch. */
export function labelledRows(rows: readonly MomentRow[], axis: TimeAxis): number[] {
  const largest = largestShare(rows)
  const placed = rows.flatMap((row, i) => (placeOf(row, axis) ? [i] : []))
  const bySize = placed
    .filter((i) => isLarge(rows[i], largest))
    .sort((a, b) => Math.abs(rows[b].share) - Math.abs(rows[a].share))
    .slice(0, 2)
  const own = placed.filter((i) => rows[i].kind === 'score')
  return own.length === 1 && !bySize.includes(own[0]) ? [...bySize, own[0]] : bySize
}

/** Room above and below the curve for labels, as a part of what it spans. */
const ROOM = 0.2

/** Values at the bottom and the top of the figure; upside down where negative is up. */
export function densityDomain({ values }: Density, polarity: 'up' | 'down'): [number, number] {
  let low = 0
  let high = 0
  for (const value of values) {
    if (value < low) low = value
    if (value > high) high = value
  }
  const span = high - low
  if (!(span > 0)) return polarity === 'up' ? [-1, 1] : [1, -1]
  const domain: [number, number] = [low - ROOM * span, high + ROOM * span]
  return polarity === 'up' ? domain : [domain[1], domain[0]]
}
