import { findPeak, type Polarity } from './peak.ts'
import { stepMs, type TimeWindow } from './time-axis.ts'

/**
 * Going back from the peak, at most to the epoch's start, the first crossing met of the stated fraction of the refined
 * peak, in ms, linear between samples.
 *
 * @param fraction 0 < fraction < 1 (checked by `scoreOf`).
 * @returns 'no peak' as `findPeak`; 'no onset' where no crossing is met, or where the peak does not take the stated side of
 *   zero at all (a fraction of it then lies beyond it, and nothing rises to it).
 * @throws RangeError as `findPeak`.
 */
export function onsetLatency(
  y: Float64Array,
  timesMs: Float64Array,
  window: TimeWindow,
  polarity: Polarity,
  fraction: number,
): number | 'no peak' | 'no onset' {
  const peak = findPeak(y, timesMs, window, polarity)
  if (peak === 'no peak') return peak
  const sign = polarity === 'positive' ? 1 : -1
  const top = sign * peak.amplitudeUv
  if (!(top > 0)) return 'no onset'
  const level = fraction * top
  const step = stepMs(timesMs)
  // the nearest point above the level: the peak's sample, or for fractions near 1 the vertex itself
  let aboveMs = timesMs[peak.first]
  let above = sign * y[peak.first]
  let k = peak.first - 1
  if (above <= level) {
    aboveMs = peak.latencyMs
    above = top
    k = Math.floor((peak.latencyMs - timesMs[0]) / step + 1e-9)
  }
  for (; k >= 0; k--) {
    const value = sign * y[k]
    if (value <= level) return timesMs[k] + ((level - value) / (above - value)) * (aboveMs - timesMs[k])
    aboveMs = timesMs[k]
    above = value
  }
  return 'no onset'
}
