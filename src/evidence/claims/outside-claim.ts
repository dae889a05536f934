import { samplesInWindow } from '../../erp/time-axis.ts'
import type { Score } from '../../erp/score.ts'
import { baselineWeights } from '../../erp/baseline.ts'
import type { Chain } from '../../filter/chain.ts'
import { type MomentTrace, traceByMoment } from '../trace-by-moment.ts'
import { isTraced, type Traced, tracedWeights } from '../traced-weights.ts'
import { fieller, mostTrials, ratioPart } from './change-claim.ts'
import type { FromOutsideClaim } from './claim.ts'
import { covarianceOf, isMeasured, termAfter, termBefore, unseenOf } from './claim-noise.ts'
import { isAtLeast, type Part, part, untold, verdictOf, type Weighed, withUnseen } from './claim-parts.ts'
import { type ClaimedWaveform, claimedWaveform, type PreparedClaim } from './claimed-waveform.ts'

/**
 * Form 3: the part of the filtered mean amplitude in a window that the trace-back by moment does not find at the window's own samples, in per cent of it:
 * what comes from other moments, from neighbouring events and from an epoch's padding. Shares of opposite sign make numbers over 100 % or below 0.
 *
 * Noise: outside − share·value is linear, so that the verdict is exact; the side is told only where the value's sign is. The interval is Fieller's
 * (null where the value cannot be told from 0).
 *
 * @throws RangeError for a per cent that is not finite, or a window outside the epoch.
 */
export function outsideClaim(prepared: PreparedClaim, form: FromOutsideClaim, chain: Chain): Weighed {
  const { percent, window } = form
  if (!Number.isFinite(percent)) throw new RangeError(`percent must be finite, was ${percent}`)
  const { timesMs, baseline, chosen, unseenThreshold } = prepared.setting
  const { first, last } = samplesInWindow(timesMs, window, 'the window of the value')
  const claimed = claimedWaveform(prepared, chosen, chain)
  const { before, after, extent, source } = claimed
  const score: Score = { kind: 'mean', ...window, polarity: 'positive' }
  const traced = tracedWeights({ score, of: 'after', baseline, timesMs, before, after })
  if (!isTraced(traced)) throw new RangeError(`a mean must have a value, had ${traced.missing}`)
  const trace = traceByMoment({ chain, extent, timesMs, baseline, source, traced })
  let inside = 0
  for (let i = first; i <= last; i++) inside += trace.weights[i - trace.from] * trace.waveform[i - trace.from]
  const { value } = trace
  const outside = value - inside
  const values: Weighed['values'] = [
    { name: 'value', value, unit: 'µV' },
    { name: 'from inside', value: inside, unit: 'µV' },
    { name: 'from outside', value: outside, unit: 'µV' },
  ]
  if (trace.aboutZero) {
    const nothing = untold({ kind: 'about zero', valueUv: value }, '%', null, values)
    return withUnseen(nothing, unseenOf(claimed, traced.onAfter), unseenThreshold)
  }
  const number = (100 * outside) / value
  const holds = isAtLeast(number, percent)
  const answer = isMeasured(prepared, claimed)
    ? underNoise(prepared, claimed, traced, trace, { first, last, value, outside, percent, holds })
    : { parts: [part(holds, number, [percent], null)], interval: null }
  const weighed: Weighed = {
    ...verdictOf(answer.parts),
    number,
    unit: '%',
    interval: answer.interval,
    values,
    decisions: [number - percent, ...answer.parts.flatMap(({ decisions }) => decisions.slice(1))],
  }
  return withUnseen(weighed, unseenOf(claimed, traced.onAfter), unseenThreshold)
}

interface Shares {
  readonly first: number
  readonly last: number
  readonly value: number
  readonly outside: number
  readonly percent: number
  readonly holds: boolean
}

function underNoise(
  prepared: PreparedClaim,
  claimed: ClaimedWaveform,
  traced: Traced,
  trace: MomentTrace,
  { first, last, value, outside, percent, holds }: Shares,
): { parts: Part[]; interval: [number, number] | null } {
  const { timesMs, baseline, trials } = prepared.setting
  // the inside as weights of x, its zero included
  const weights = new Float64Array(timesMs.length)
  let sum = 0
  for (let i = first; i <= last; i++) {
    weights[i] = trace.weights[i - trace.from]
    sum += weights[i]
  }
  if (trace.zero === 'baseline mean')
    baselineWeights(baseline, timesMs).forEach((b, i) => {
      weights[i] -= sum * b
    })
  const ofValue = [termAfter(prepared, claimed, traced.onAfter)]
  const ofOutside = [...ofValue, termBefore(prepared, claimed, weights, -1)]
  const covariance = covarianceOf(prepared, claimed, [ofOutside, ofValue])
  const side = ratioPart(holds, outside, value, percent / 100, covariance, trials)
  const sign = part(holds, value, [0], { sd: Math.sqrt(Math.max(0, covariance[1][1])), trials })
  const both = [side, sign]
  const interval = fieller(outside, value, covariance)
  return {
    parts: [
      {
        holds,
        told: both.every(({ told }) => told),
        trialsNeeded: mostTrials(both),
        decisions: [side.decisions[0], side.decisions[1], sign.decisions[1]],
      },
    ],
    interval: interval && [100 * interval[0], 100 * interval[1]],
  }
}
