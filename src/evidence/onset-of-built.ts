import type { Component } from '../erp/component.ts'
import { waveformAt } from '../erp/waveform.ts'

/** The onset is where a waveform first reaches this part of its largest absolute value. */
export const ONSET_SHARE = 0.05

/**
 * The onset of a built waveform: the earliest moment of the epoch at which noise-free |x| reaches 5 % of its largest value there, in
 * ms. Steady tones are left out: they are interference, and never begin.
 *
 * Found among the samples, then between them by bisection on the components themselves.
 *
 * @param timesMs evenly spaced sample times of the epoch; an onset at its first sample means that the waveform is up already.
 * @returns 'no onset' for a waveform that is 0 throughout.
 * @throws RangeError for a component that is refused.
 */
export function onsetOfBuilt(components: readonly Component[], timesMs: Float64Array): number | 'no onset' {
  const bounded = components.filter((component) => component.shape !== 'tone')
  const x = waveformAt(bounded, timesMs)
  let largest = 0
  for (const value of x) largest = Math.max(largest, Math.abs(value))
  if (largest === 0) return 'no onset'
  const level = ONSET_SHARE * largest
  const first = x.findIndex((value) => Math.abs(value) >= level)
  if (first === 0) return timesMs[0]
  let below = timesMs[first - 1]
  let above = timesMs[first]
  const at = new Float64Array(1)
  for (let i = 0; i < 50; i++) {
    at[0] = (below + above) / 2
    if (Math.abs(waveformAt(bounded, at)[0]) >= level) above = at[0]
    else below = at[0]
  }
  return above
}
