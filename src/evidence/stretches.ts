import { stepMs } from '../erp/time-axis.ts'

/**
 * Stretches of the epoch for the account by moment: a partition of its samples, told by the boundaries inside it. What lies before and
 * after the epoch are stretches of their own, which no boundary can touch.
 */
export interface Boundary {
  /** First sample of the stretch that begins here, 1 … n − 1. */
  readonly sample: number
  /** The moment by which it is named, within a sample of that one: a window's limit, or the sample's own time. */
  readonly atMs: number
}

/** Boundaries in ascending order, no two on one sample. */
export type Stretches = readonly Boundary[]

/** @throws RangeError for boundaries outside the epoch, out of order or not on samples. */
export function checkStretches(stretches: Stretches, samples: number): void {
  let before = 0
  stretches.forEach(({ sample, atMs }, i) => {
    if (!Number.isInteger(sample) || sample < 1 || sample > samples - 1)
      throw new RangeError(`stretches[${i}].sample must be a whole number from 1 to ${samples - 1}, was ${sample}`)
    if (sample <= before && i > 0)
      throw new RangeError(`stretches[${i}].sample must lie after ${before}, was ${sample}`)
    if (!Number.isFinite(atMs)) throw new RangeError(`stretches[${i}].atMs must be a finite number, was ${atMs}`)
    before = sample
  })
}

/** The boundary at the sample nearest a moment, which then begins a stretch; null outside the epoch's inner samples. */
export function boundaryAt(timesMs: Float64Array, atMs: number): Boundary | null {
  const sample = Math.round((atMs - timesMs[0]) / stepMs(timesMs))
  if (!(sample >= 1 && sample <= timesMs.length - 1)) return null
  return { sample, atMs: timesMs[sample] }
}

/** One boundary more, at the sample nearest the moment; the same stretches where there is one already, or outside the epoch. */
export function splitStretch(stretches: Stretches, timesMs: Float64Array, atMs: number): Stretches {
  const boundary = boundaryAt(timesMs, atMs)
  if (boundary === null || stretches.some(({ sample }) => sample === boundary.sample)) return stretches
  return [...stretches, boundary].sort((a, b) => a.sample - b.sample)
}

/**
 * Moves a boundary to the sample nearest the moment, but never onto or past its neighbours: every stretch keeps a
 * sample.
 *
 * @throws RangeError for an index that no boundary has, or a moment that is not a number.
 */
export function moveBoundary(stretches: Stretches, index: number, timesMs: Float64Array, atMs: number): Stretches {
  requireIndex(stretches, index)
  if (Number.isNaN(atMs)) throw new RangeError('atMs must be a number, was NaN')
  const least = index === 0 ? 1 : stretches[index - 1].sample + 1
  const most = index === stretches.length - 1 ? timesMs.length - 1 : stretches[index + 1].sample - 1
  const wanted = Math.round((atMs - timesMs[0]) / stepMs(timesMs))
  const sample = Math.min(most, Math.max(least, wanted))
  if (sample === stretches[index].sample) return stretches
  return stretches.map((boundary, i) => (i === index ? { sample, atMs: timesMs[sample] } : boundary))
}

/** One boundary less: the two stretches at its sides become one. Throws as `moveBoundary`. */
export function removeBoundary(stretches: Stretches, index: number): Stretches {
  requireIndex(stretches, index)
  return stretches.filter((_, i) => i !== index)
}

function requireIndex(stretches: Stretches, index: number): void {
  if (!Number.isInteger(index) || index < 0 || index >= stretches.length)
    throw new RangeError(`index must be that of a boundary (0 to ${stretches.length - 1}), was ${index}`)
}
