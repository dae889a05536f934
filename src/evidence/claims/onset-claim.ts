import { scoreOf } from '../../erp/score.ts'
import type { Chain } from '../../filter/chain.ts'
import { noValue, rowOf, scoreOfRow, unseenOfScore } from './change-claim.ts'
import type { OnsetClaim } from './claim.ts'
import { simulatedNoise } from './claim-noise.ts'
import { intervalOf, isAtLeast, part, untold, verdictOf, type Weighed, withUnseen } from './claim-parts.ts'
import { claimedWaveform, type PreparedClaim } from './claimed-waveform.ts'

/**
 * Form 5: how far the readout's onset latency moves in the claimed direction, ms; below 0 where it moves the other way.
 *
 * Noise by simulation, the interval ± 1.96 SD; where more than one draw in twenty has no onset, it cannot be told and has no interval.
 *
 * @throws RangeError for an amount below 0, or a window outside the epoch.
 */
export function onsetClaim(prepared: PreparedClaim, form: OnsetClaim, chain: Chain): Weighed {
  const { direction, ms } = form
  if (!(ms >= 0) || !Number.isFinite(ms)) throw new RangeError(`ms must be at least 0, was ${ms}`)
  const { setting } = prepared
  const claimed = claimedWaveform(prepared, setting.chosen, chain)
  const row = rowOf(setting, claimed, 'onset-latency')
  const missing = noValue(row, 'ms')
  if (missing !== null) return missing
  const { before, after } = row
  if (typeof before === 'string' || typeof after === 'string')
    throw new RangeError(`an onset must be found before and after, was ${before} and ${after}`)
  const sign = direction === 'later' ? 1 : -1
  // −0 would be a strange number to hand out
  const number = sign * (after - before) + 0
  const score = scoreOfRow(setting, row)
  const noise = simulatedNoise(prepared, claimed, (x, y) => {
    const first = scoreOf(x, setting.timesMs, score)
    const second = scoreOf(y, setting.timesMs, score)
    return typeof first === 'string' || typeof second === 'string' ? null : sign * (second - first)
  })
  const values: Weighed['values'] = [
    { name: 'before', value: before, unit: 'ms' },
    { name: 'after', value: after, unit: 'ms' },
    { name: 'change', value: after - before, unit: 'ms' },
  ]
  const share = unseenOfScore(prepared, claimed, score)
  if (noise === 'missing') {
    const nothing = untold({ kind: 'within noise', trialsNeeded: null }, 'ms', number, values)
    return withUnseen(nothing, share, setting.unseenThreshold)
  }
  const moved = part(isAtLeast(number, ms), number, [ms], noise)
  const answer: Weighed = {
    ...verdictOf([moved]),
    number,
    unit: 'ms',
    interval: intervalOf(number, noise),
    values,
    decisions: moved.decisions,
  }
  return withUnseen(answer, share, setting.unseenThreshold)
}
