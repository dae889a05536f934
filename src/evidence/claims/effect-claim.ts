import { type Score, scoreOf, scoreWeights } from '../../erp/score.ts'
import type { Chain } from '../../filter/chain.ts'
import type { EffectClaim } from './claim.ts'
import { linearNoise, termAfter, termBefore, unseenOf } from './claim-noise.ts'
import { intervalOf, isAtLeast, type Part, part, verdictOf, type Weighed, withUnseen } from './claim-parts.ts'
import { claimedWaveform, once, type PreparedClaim } from './claimed-waveform.ts'

/**
 * Form 4: the mean amplitude of the difference first − second in a window, before and after.
 *
 * - exists without the filter: |before| ≥ least. The filter has no part in it.
 * - is absent without the filter, which says that it is there with it: |before| < least and |after| ≥ least.
 * - changes sign: both at least `leastUv` in size and of opposite sign.
 *
 * The number is the value on which the answer hangs: before, where that settles it, else after. Noise is exact.
 *
 * @throws RangeError unless leastUv is above 0; for conditions that are not there or a window outside the epoch.
 */
export function effectClaim(prepared: PreparedClaim, form: EffectClaim, chain: Chain): Weighed {
  const { first, second, window, says, leastUv } = form
  if (!(leastUv > 0) || !Number.isFinite(leastUv)) throw new RangeError(`leastUv must be above 0, was ${leastUv}`)
  const { timesMs, baseline, unseenThreshold } = prepared.setting
  const claimed = claimedWaveform(prepared, { kind: 'difference', first, second }, chain)
  const score: Score = { kind: 'mean', ...window, polarity: 'positive' }
  const before = scoreOf(claimed.before, timesMs, score) as number
  const after = scoreOf(claimed.after, timesMs, score) as number
  const w = once(prepared, `weights of the mean ${window.fromMs} to ${window.toMs}`, () =>
    scoreWeights(score, baseline, timesMs),
  )
  const noiseBefore = linearNoise(prepared, claimed, () => [termBefore(prepared, claimed, w)])
  const noiseAfter = linearNoise(prepared, claimed, () => [termAfter(prepared, claimed, w)])
  const bounds = [-leastUv, leastUv]
  const there = isAtLeast(Math.abs(before), leastUv)
  const kept = isAtLeast(Math.abs(after), leastUv)
  let parts: Part[]
  let hangsOnAfter: boolean
  switch (says) {
    case 'exists without the filter':
      parts = [part(there, before, bounds, noiseBefore)]
      hangsOnAfter = false
      break
    case 'is absent without the filter':
      parts = [part(!there, before, bounds, noiseBefore), part(kept, after, bounds, noiseAfter)]
      hangsOnAfter = !there
      break
    case 'changes sign': {
      const opposite = before * after < 0
      const signBefore = part(opposite, before, [0], noiseBefore)
      const signAfter = part(opposite, after, [0], noiseAfter)
      const known = [signBefore.trialsNeeded, signAfter.trialsNeeded].filter((trials) => trials !== null)
      parts = [
        part(there, before, bounds, noiseBefore),
        part(kept, after, bounds, noiseAfter),
        {
          holds: opposite,
          told: signBefore.told && signAfter.told,
          trialsNeeded: known.length < 2 ? null : Math.max(...known),
          decisions: [...signBefore.decisions, ...signAfter.decisions],
        },
      ]
      hangsOnAfter = there
      break
    }
  }
  const number = hangsOnAfter ? after : before
  const answer: Weighed = {
    ...verdictOf(parts),
    number,
    unit: 'µV',
    interval: intervalOf(number, hangsOnAfter ? noiseAfter : noiseBefore),
    values: [
      { name: 'before', value: before, unit: 'µV' },
      { name: 'after', value: after, unit: 'µV' },
    ],
    decisions: parts.flatMap(({ decisions }) => decisions),
  }
  return hangsOnAfter ? withUnseen(answer, unseenOf(claimed, w), unseenThreshold) : answer
}
