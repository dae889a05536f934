import { type Component, componentAt } from '../erp/component.ts'
import { largestAbsolute } from './fidelity.ts'
import type { TraceSource } from './traced-waveform.ts'

/** A large component of a waveform: where it stands above a quarter of its peak. */
export interface LargeComponent {
  /** Its name in a built waveform; null for one found in a recorded one. */
  readonly name: string | null
  readonly fromMs: number
  readonly peakMs: number
  readonly toMs: number
}

/** A component's limits are where it has fallen to this part of its peak: for a Gaussian 0.7 of its width to either side. */
const LEVEL = 0.25
/** A built component counts from this part of the largest one on, a recorded peak from this part of the largest value on. */
const LARGE_BUILT = 0.2
const LARGE_RECORDED = 0.35
/** More would make a table that no one reads. */
const MOST = 3

/**
 * The large components of a waveform on the epoch, the largest first; of those that overlap the smaller ones are left out.
 *
 * Built waveforms: components of at least 20 % of the largest amplitude, each on its own. Recorded ones: the largest extremes of |x|, of at
 * least 35 % of the largest, each as far as the waveform keeps its side. Limits are rounded to 10 ms where
 * that is a small part of the component.
 *
 * @param x unfiltered waveform on the epoch, baseline-corrected.
 */
export function largeComponents(source: TraceSource, timesMs: Float64Array, x: Float64Array): LargeComponent[] {
  const found: LargeComponent[] = []
  const add = (candidate: LargeComponent | null) => {
    if (candidate === null || found.length >= MOST) return
    if (found.every((other) => candidate.toMs <= other.fromMs || candidate.fromMs >= other.toMs)) found.push(candidate)
  }
  if (source.kind === 'built') {
    const bounded = source.components.filter((c) => c.shape !== 'tone' && c.amplitudeUv !== 0)
    const largest = Math.max(0, ...bounded.map((component) => Math.abs(component.amplitudeUv)))
    for (const component of bounded
      .filter((c) => Math.abs(c.amplitudeUv) >= LARGE_BUILT * largest)
      .sort((a, b) => Math.abs(b.amplitudeUv) - Math.abs(a.amplitudeUv)))
      add(ofBuilt(component, timesMs))
    return found
  }
  const least = LARGE_RECORDED * largestAbsolute(x)
  if (least === 0) return found
  const extremes: number[] = []
  for (let i = 1; i + 1 < x.length; i++) {
    const size = Math.abs(x[i])
    if (size >= least && size >= side(x[i], x[i - 1]) && size > side(x[i], x[i + 1])) extremes.push(i)
  }
  extremes.sort((a, b) => Math.abs(x[b]) - Math.abs(x[a]))
  for (const at of extremes) add(grow(null, x, at, timesMs))
  return found
}

function ofBuilt(component: Component, timesMs: Float64Array): LargeComponent | null {
  if (component.shape === 'tone') return null
  const first = timesMs[0]
  const stepMs = (timesMs[timesMs.length - 1] - first) / (timesMs.length - 1)
  const at = Math.round((component.latencyMs - first) / stepMs)
  if (at < 1 || at > timesMs.length - 2) return null
  return grow(component.name, componentAt(component, timesMs), at, timesMs)
}

/** `value` seen from the side of `of`: negative where it lies on the other one. */
function side(of: number, value: number): number {
  return of < 0 ? -value : value
}

function grow(name: string | null, x: Float64Array, at: number, timesMs: Float64Array): LargeComponent | null {
  const level = LEVEL * Math.abs(x[at])
  let from = at
  let to = at
  while (from > 0 && side(x[at], x[from - 1]) >= level) from--
  while (to < x.length - 1 && side(x[at], x[to + 1]) >= level) to++
  const width = timesMs[to] - timesMs[from]
  const grid = width >= 60 ? 10 : width >= 30 ? 5 : 1
  const rounded = (ms: number) => Math.round(ms / grid) * grid
  const fromMs = Math.max(timesMs[0], rounded(timesMs[from]))
  const toMs = Math.min(timesMs[timesMs.length - 1], rounded(timesMs[to]))
  const peakMs = timesMs[at]
  return fromMs < peakMs && peakMs < toMs ? { name, fromMs, peakMs, toMs } : null
}
