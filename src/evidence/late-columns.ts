import { absoluteSum, lastBefore } from '../filter/absolute-sum.ts'
import { runContinuous } from '../filter/stand-alone.ts'
import { type ActingStages, actOn } from './acting-stages.ts'
import { centresFor, gaussianOn, type GaussianSum } from './squared-exponential.ts'

/** Late activity as the chain leaves it on an epoch of n samples: K·Σx·Kᵀ = FᵀF with one row of F for each Gaussian. */
export interface LateColumns {
  readonly n: number
  /** First sample of late activity, relative to the epoch's; may lie before it. */
  readonly onset: number
  /** One after its last sample. */
  readonly end: number
  /** Rows of n values. */
  readonly filtered: Float64Array
  readonly count: number
  /** Centres of the Gaussians that a row stands for: neighbours far after the epoch share one. */
  readonly members: readonly Float64Array[]
  readonly sum: GaussianSum
}

/** What of Σ|h| may lie further ahead than the late activity goes on after the epoch. */
const LEFT_OUT = 1e-4
/** More than this long after the epoch only slow parts of a kernel are alive, and neighbouring Gaussians may be taken together. */
const NEAR_SECONDS = 2
/** So wide is such a group, of its distance to the epoch: less than any part that is still alive moves in. */
const GROUP_WIDTH = 0.05

/** Samples after the last one of which the chain still brings something back to it: 0 where it is causal, or cut to the epoch before. */
export function samplesAhead(stages: ActingStages): number {
  const sum = absoluteSum(stages.continuous, Float64Array.of(1))
  return Math.max(0, -lastBefore(sum, LEFT_OUT * sum.total))
}

/**
 * @param onset  first sample at which activity may be.
 * @throws RangeError for an onset that is not before the epoch's end, or an epoch not longer than a stage's padding.
 */
export function lateColumns(stages: ActingStages, n: number, onset: number, sum: GaussianSum): LateColumns {
  if (!(onset < n)) {
    throw new RangeError(`late activity must begin before the epoch ends (sample ${n}), began at sample ${onset}`)
  }
  const end = n + samplesAhead(stages)
  const half = sum.halfWidthSamples
  const rows: Float64Array[] = []
  const members: Float64Array[] = []
  const whole: number[] = []
  for (const centre of centresFor(sum, onset, end)) {
    // a Gaussian that is cut, or that padding follows, is filtered by itself; the others are one waveform at other moments
    if (stages.onEpoch.length === 0 && centre - half >= onset && centre + half < end) {
      whole.push(centre)
      continue
    }
    const from = Math.max(onset, Math.ceil(centre) - half)
    const to = Math.min(end, Math.floor(centre) + half + 1)
    rows.push(actOn(stages, gaussianOn(sum, centre, from, to), from, n))
    members.push(Float64Array.of(centre))
  }
  const responseAt = movedResponse(stages, n, whole, sum)
  for (const group of grouped(whole, n, n + NEAR_SECONDS * stages.samplingRateHz)) {
    const row = new Float64Array(n)
    for (const centre of group) {
      const response = responseAt(centre)
      for (let i = 0; i < n; i++) row[i] += response[i]
    }
    const share = 1 / Math.sqrt(group.length)
    if (share < 1) for (let i = 0; i < n; i++) row[i] *= share
    rows.push(row)
    members.push(Float64Array.from(group))
  }
  const filtered = new Float64Array(rows.length * n)
  rows.forEach((row, j) => filtered.set(row, j * n))
  return { n, onset, end, filtered, count: rows.length, members, sum }
}

/** The late activity with the weights u of its rows, from `onset` to `end`. */
export function lateActivity({ onset, end, members, sum }: LateColumns, weights: Float64Array): Float64Array {
  const values = new Float64Array(end - onset)
  const half = sum.halfWidthSamples
  members.forEach((centres, j) => {
    const share = weights[j] / Math.sqrt(centres.length)
    for (const centre of centres) {
      const from = Math.max(onset, Math.ceil(centre) - half)
      const to = Math.min(end, Math.floor(centre) + half + 1)
      const piece = gaussianOn(sum, centre, from, to)
      for (let i = 0; i < piece.length; i++) values[from - onset + i] += share * piece[i]
    }
  })
  return values
}

/** Gaussians beyond `far` as groups of neighbours, whose responses hardly differ, so that slow kernels need few more of them. */
function grouped(centres: readonly number[], n: number, far: number): number[][] {
  const groups: number[][] = []
  for (const centre of centres) {
    const group = groups[groups.length - 1]
    if (centre >= far && group && group[0] >= far && centre < group[0] + GROUP_WIDTH * (group[0] - n))
      group.push(centre)
    else groups.push([centre])
  }
  return groups
}

/** Response of the continuous stages on the epoch to a Gaussian at any of the given centres. */
function movedResponse(
  { continuous }: ActingStages,
  n: number,
  centres: readonly number[],
  sum: GaussianSum,
): (centre: number) => Float64Array {
  if (centres.length === 0) return () => new Float64Array(n)
  const half = sum.halfWidthSamples
  const first = -Math.floor(centres[centres.length - 1])
  const last = n - Math.floor(centres[0])
  const byPhase = new Map<number, Float64Array>()
  return (centre) => {
    const place = Math.floor(centre)
    const phase = centre - place
    let response = byPhase.get(phase)
    if (!response) {
      const gaussian = gaussianOn(sum, phase, -half, half + 2)
      response = runContinuous(continuous, gaussian, first + half, last + half)
      byPhase.set(phase, response)
    }
    return response.subarray(-place - first, n - place - first)
  }
}
