import type { Baseline } from '../erp/baseline.ts'
import { samplesInWindow, stepMs, type TimeWindow } from '../erp/time-axis.ts'
import type { LargeComponent } from './large-components.ts'
import { type Boundary, boundaryAt, type Stretches } from './stretches.ts'

/** What stretches are named after. */
export interface StretchMarks {
  readonly timesMs: Float64Array
  readonly baseline: Baseline
  /** Where the value is measured. */
  readonly window: TimeWindow
  readonly components: readonly LargeComponent[]
}

/** What a stretch of the epoch is. */
export interface StretchName {
  /** 'score' lies in the score window, 'baseline' in the baseline window, 'component' in a large component, 'other' in none of them. */
  readonly kind: 'score' | 'baseline' | 'component' | 'other'
  /** Whether it is the whole score window, the whole baseline window or the whole component. */
  readonly whole: boolean
  readonly component: LargeComponent | null
}

/** Nothing shorter than this is split off for a component. */
const SHORTEST_MS = 10

/**
 * The stretches that an account begins with: the baseline window, the score window, each half of each large component, and what
 * lies between. The score window stays whole where it meets the others; what is left of a component beside the two windows
 * keeps its own stretch unless it is shorter than 10 ms.
 */
export function defaultStretches(marks: StretchMarks): Stretches {
  const { timesMs, baseline, window, components } = marks
  const n = timesMs.length
  const taken = new Map<number, Boundary>()
  const put = (boundary: Boundary | null) => {
    if (boundary && boundary.sample >= 1 && boundary.sample <= n - 1 && !taken.has(boundary.sample))
      taken.set(boundary.sample, boundary)
  }
  const kept: { first: number; last: number }[] = []
  const putWindow = (some: TimeWindow) => {
    const { first, last } = samplesInWindow(timesMs, some, 'window of a stretch')
    const inside = (sample: number) => kept.some((other) => sample > other.first && sample <= other.last)
    // where windows overlap, the one that came first stays whole
    if (!inside(first)) put({ sample: first, atMs: timesMs[first] })
    if (!inside(last + 1)) put({ sample: last + 1, atMs: timesMs[last] })
    kept.push({ first, last })
  }
  putWindow(window)
  if (baseline !== 'none') putWindow(baseline)
  const shortest = Math.max(2, Math.round(SHORTEST_MS / stepMs(timesMs)))
  for (const { fromMs, peakMs, toMs } of components) {
    for (const atMs of [fromMs, peakMs, toMs]) {
      const boundary = boundaryAt(timesMs, atMs)
      if (boundary === null) continue
      const { sample } = boundary
      if (kept.some(({ first, last }) => sample > first && sample <= last)) continue
      if (sample < shortest || n - sample < shortest) continue
      if ([...taken.keys()].some((other) => Math.abs(other - sample) < shortest)) continue
      put(boundary)
    }
  }
  return [...taken.values()].sort((a, b) => a.sample - b.sample)
}

/** What the samples from … to − 1 of the epoch are. */
export function nameStretch(marks: StretchMarks, from: number, to: number): StretchName {
  const { timesMs, baseline, window, components } = marks
  const within = (some: TimeWindow) => {
    const { first, last } = samplesInWindow(timesMs, some, 'window of a stretch')
    return { inside: from >= first && to - 1 <= last, whole: from === first && to - 1 === last }
  }
  const score = within(window)
  if (score.inside) return { kind: 'score', whole: score.whole, component: null }
  if (baseline !== 'none') {
    const base = within(baseline)
    if (base.inside) return { kind: 'baseline', whole: base.whole, component: null }
  }
  const step = stepMs(timesMs)
  const middle = (timesMs[from] + timesMs[to - 1]) / 2
  const tolerance = step * 0.51
  const component = components.find(
    ({ fromMs, toMs }) =>
      middle > fromMs && middle < toMs && timesMs[from] >= fromMs - tolerance && timesMs[to - 1] <= toMs + tolerance,
  )
  if (component === undefined) return { kind: 'other', whole: false, component: null }
  const whole = timesMs[from] <= component.fromMs + tolerance && timesMs[to - 1] >= component.toMs - step - tolerance
  return { kind: 'component', whole, component }
}
