import { scoreWeights } from '../../erp/score.ts'
import { samplesInWindow } from '../../erp/time-axis.ts'
import type { Chain } from '../../filter/chain.ts'
import { largestAbsolute } from '../fidelity.ts'
import { ONSET_SHARE } from '../onset-of-built.ts'
import type { DeflectionClaim } from './claim.ts'
import { linearNoise, termAfter, termBefore, unseenOf } from './claim-noise.ts'
import { intervalOf, isAtLeast, part, untold, verdictOf, type Weighed, withUnseen } from './claim-parts.ts'
import { claimedWaveform, once, type PreparedClaim } from './claimed-waveform.ts'

/**
 * Form 2: the value of after − before that is largest in size among the window's samples, held by its size against the amount, where the unfiltered
 * waveform has nothing: its size in the window stays below 5 % of its largest absolute value in the epoch, as before an onset.
 *
 * Noise: both moments are held fixed, which makes both values linear and their noise exact. Under noise it must also be told that the unfiltered waveform
 * has nothing there.
 *
 * @throws RangeError for an amount below 0, or a window outside the epoch.
 */
export function deflectionClaim(prepared: PreparedClaim, form: DeflectionClaim, chain: Chain): Weighed {
  const { amount, unit } = form
  if (!(amount >= 0) || !Number.isFinite(amount)) throw new RangeError(`amount must be at least 0, was ${amount}`)
  const { timesMs, baseline, chosen, unseenThreshold } = prepared.setting
  const { first, last } = samplesInWindow(timesMs, form.window, 'the window of the deflection')
  const claimed = claimedWaveform(prepared, chosen, chain)
  const { before, after } = claimed
  const largest = largestAbsolute(before)
  let at = first
  let most = first
  for (let i = first; i <= last; i++) {
    if (Math.abs(after[i] - before[i]) > Math.abs(after[at] - before[at])) at = i
    if (Math.abs(before[i]) > Math.abs(before[most])) most = i
  }
  const change = after[at] - before[at]
  const limitUv = ONSET_SHARE * largest
  const values: Weighed['values'] = [
    { name: 'before', value: before[at], unit: 'µV' },
    { name: 'after', value: after[at], unit: 'µV' },
    { name: 'change', value: change, unit: 'µV' },
    { name: 'at', value: timesMs[at], unit: 'ms' },
    { name: 'largest before', value: largest, unit: 'µV' },
    { name: 'largest before in the window', value: before[most], unit: 'µV' },
  ]
  if (unit === '%' && largest === 0) return untold({ kind: 'about zero', valueUv: 0 }, unit, null, values)
  const scale = unit === '%' ? 100 / largest : 1
  const number = scale * change

  const weightsAt = (i: number) =>
    once(prepared, `weights at ${i}`, () =>
      scoreWeights({ kind: 'moment', fromMs: timesMs[i], toMs: timesMs[i], polarity: 'positive' }, baseline, timesMs),
    )
  const found = linearNoise(prepared, claimed, () => [
    termAfter(prepared, claimed, weightsAt(at)),
    termBefore(prepared, claimed, weightsAt(at), -1),
  ])
  const noise = found && { ...found, sd: scale * found.sd }
  const made = part(isAtLeast(Math.abs(number), amount), Math.abs(number), [amount], noise)
  const nothingBefore = largest === 0 || Math.abs(before[most]) < limitUv
  const noiseBefore = linearNoise(prepared, claimed, () => [termBefore(prepared, claimed, weightsAt(most))])
  const empty = part(nothingBefore, before[most], largest === 0 ? [] : [-limitUv, limitUv], noiseBefore)
  const interval = intervalOf(number, noise)
  const decisions = made.decisions
  if (!nothingBefore && empty.told) {
    const grounds = { kind: 'already there', largestUv: before[most], limitUv } as const
    return { verdict: 'does not hold', number, unit, interval, grounds, values, decisions }
  }
  const answer: Weighed = { ...verdictOf([made, empty]), number, unit, interval, values, decisions }
  return withUnseen(answer, unseenOf(claimed, weightsAt(at)), unseenThreshold)
}
