import { LIMIT_TOLERANCE_SAMPLES, samplesInWindow, stepMs, type TimeWindow } from './time-axis.ts'

export type Polarity = 'positive' | 'negative'

export interface Peak {
  latencyMs: number
  amplitudeUv: number
  /** First and last sample of the peak; more than one sample is a plateau. */
  first: number
  last: number
  /** The samples whose weighted sum is `amplitudeUv` at this fixed moment, and their weights (sum 1). */
  weightsFrom: number
  weights: number[]
}

/** A peak exceeds every other sample this near. */
const NEIGHBOURHOOD_MS = 10
/** Values that differ by at most this part of the waveform's range count as equal. */
const EQUAL = 1e-12

/**
 * The peak of a waveform in a window.
 *
 * Among the samples in the window that exceed every other sample within ±10 ms in the stated polarity, whatever their sign, the
 * largest (the earliest of equals). Samples outside the window are consulted, so the window's edge is never taken for a
 * peak; a sample at the very end of the epoch has an unseen neighbour and is none either. Neighbouring samples that are equal to 1e-12 of
 * the range form a plateau: one peak, at its middle time. A parabola through three samples gives latency and amplitude; its
 * vertex may lie up to half a sample outside the window. On a plateau of two samples the vertex is their middle by either of the
 * two parabolas through them, whose mean amplitude is taken; on a longer one the parabola is flat.
 *
 * @param y µV, one finite value per time.
 * @returns 'no peak' where no sample qualifies.
 * @throws RangeError as `samplesInWindow`.
 */
export function findPeak(
  y: Float64Array,
  timesMs: Float64Array,
  window: TimeWindow,
  polarity: Polarity,
): Peak | 'no peak' {
  const step = stepMs(timesMs)
  const { first: from, last: to } = samplesInWindow(timesMs, window, 'score window')
  const n = y.length
  const sign = polarity === 'positive' ? 1 : -1
  // at rates under 100 Hz the two neighbours are consulted all the same
  const reach = Math.max(1, Math.floor(NEIGHBOURHOOD_MS / step + LIMIT_TOLERANCE_SAMPLES))
  let low = Infinity
  let high = -Infinity
  for (let i = 0; i < n; i++) {
    if (y[i] < low) low = y[i]
    if (y[i] > high) high = y[i]
  }
  const equal = EQUAL * (high - low)

  let best = -1
  let bestLast = -1
  let bestValue = -Infinity
  // a plateau may begin before the window and still have its middle inside
  let first = from
  while (first > 0 && Math.abs(y[first - 1] - y[from]) <= equal) first--
  while (first <= to) {
    let last = first
    while (last + 1 < n && Math.abs(y[last + 1] - y[first]) <= equal) last++
    const middle = (first + last) / 2
    const value = sign * y[first]
    if (
      first > 0 &&
      last < n - 1 &&
      middle >= from &&
      middle <= to &&
      value > bestValue + equal &&
      exceedsNeighbours(y, sign, first, last, reach, equal)
    ) {
      best = first
      bestLast = last
      bestValue = value
    }
    first = last + 1
  }
  if (best < 0) return 'no peak'
  return refine(y, timesMs, best, bestLast, step)
}

function exceedsNeighbours(
  y: Float64Array,
  sign: number,
  first: number,
  last: number,
  reach: number,
  equal: number,
): boolean {
  const rival = sign * y[first] - equal
  for (let k = Math.max(0, first - reach); k < first; k++) if (sign * y[k] >= rival) return false
  for (let k = Math.min(y.length - 1, last + reach); k > last; k--) if (sign * y[k] >= rival) return false
  return true
}

function refine(y: Float64Array, timesMs: Float64Array, first: number, last: number, step: number): Peak {
  if (last - first >= 2) {
    const count = last - first + 1
    const weights = new Array<number>(count).fill(1 / count)
    return {
      latencyMs: (timesMs[first] + timesMs[last]) / 2,
      amplitudeUv: weigh(y, first, weights),
      first,
      last,
      weightsFrom: first,
      weights,
    }
  }
  if (last - first === 1) {
    // each parabola has its vertex in the middle, an eighth of its outer fall above the two
    const weights = [-1 / 16, 9 / 16, 9 / 16, -1 / 16]
    return {
      latencyMs: (timesMs[first] + timesMs[last]) / 2,
      amplitudeUv: weigh(y, first - 1, weights),
      first,
      last,
      weightsFrom: first - 1,
      weights,
    }
  }
  const before = y[first - 1] - y[first]
  const after = y[first + 1] - y[first]
  const d = (before - after) / (2 * (before + after))
  const weights = [(d * (d - 1)) / 2, 1 - d * d, (d * (d + 1)) / 2]
  return {
    latencyMs: timesMs[first] + d * step,
    amplitudeUv: weigh(y, first - 1, weights),
    first,
    last,
    weightsFrom: first - 1,
    weights,
  }
}

function weigh(y: Float64Array, from: number, weights: readonly number[]): number {
  let sum = 0
  for (let k = 0; k < weights.length; k++) sum += weights[k] * y[from + k]
  return sum
}
