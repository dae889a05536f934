import type { Polarity } from './peak.ts'
import { runningArea } from './signed-area.ts'
import { stepMs, type TimeWindow } from './time-axis.ts'

/**
 * The moment at which the stated fraction of the signed area in the window is reached, in ms, linear in the running area between
 * samples; the earliest such moment where the area stands still.
 *
 * @param fraction 0 < fraction < 1 (checked by `scoreOf`).
 * @returns 'no area' where the waveform never takes the stated side in the window.
 * @throws RangeError as `signedArea`.
 */
export function fractionalAreaLatency(
  y: Float64Array,
  timesMs: Float64Array,
  window: TimeWindow,
  polarity: Polarity,
  fraction: number,
): number | 'no area' {
  const { first, area } = runningArea(y, timesMs, window, polarity)
  const total = area[area.length - 1]
  if (total === 0) return 'no area'
  let k = 1
  while (Math.abs(area[k]) < fraction * Math.abs(total)) k++
  const part = (fraction * total - area[k - 1]) / (area[k] - area[k - 1])
  return timesMs[first + k - 1] + part * stepMs(timesMs)
}
