import type { Score } from '../../erp/score.ts'
import { scoreLinearity, scoreOf, scoreWeights } from '../../erp/score.ts'
import type { Chain } from '../../filter/chain.ts'
import { type FidelityRow, fidelityRows, largestAbsolute, scoreReference } from '../fidelity.ts'
import { isTraced, tracedWeights } from '../traced-weights.ts'
import { NORMAL_95 } from '../late-only-verdict.ts'
import type { ChangeClaim, ClaimRow, ClaimSetting, Unit } from './claim.ts'
import {
  covarianceOf,
  isMeasured,
  linearNoise,
  simulatedNoise,
  termAfter,
  termBefore,
  unseenOf,
} from './claim-noise.ts'
import {
  intervalOf,
  isAtLeast,
  isAtMost,
  type Part,
  part,
  type PartNoise,
  type Unseen,
  untold,
  verdictOf,
  type Weighed,
  withUnseen,
} from './claim-parts.ts'
import { type ClaimedWaveform, claimedWaveform, once, type PreparedClaim } from './claimed-waveform.ts'

/**
 * Form 1: after − before of a row of the readout, in its unit or in the readout's per cent (of before, or of the waveform's largest absolute
 * value where before is under 20 % of that), held by its size against the amount.
 *
 * Noise: a mean and a moment exactly; in per cent of a noisy value before by the two linear combinations change ∓ share·before, so that the verdict is
 * exact, with Fieller's interval (null where the value before cannot be told from 0). Peaks, areas and latencies by simulation, the interval ± 1.96 SD
 * of the number; where more than one draw in twenty has no such number, it cannot be told and has no interval.
 *
 * @throws RangeError for an amount below 0, per cent of a latency, or windows outside the epoch.
 */
export function changeClaim(prepared: PreparedClaim, form: ChangeClaim, chain: Chain): Weighed {
  const { amount, relation } = form
  if (!(amount >= 0) || !Number.isFinite(amount)) throw new RangeError(`amount must be at least 0, was ${amount}`)
  const claimed = claimedWaveform(prepared, prepared.setting.chosen, chain)
  const row = rowOf(prepared.setting, claimed, form.row)
  const inPercent = form.unit === '%'
  if (inPercent && row.unit === 'ms') throw new RangeError(`unit must be ms for ${form.row}, was %`)
  const unit: Unit = inPercent ? '%' : row.unit
  const { before, after, change } = row
  const missing = noValue(row, unit)
  if (missing !== null) return missing
  if (typeof before === 'string' || typeof after === 'string' || change === null)
    throw new RangeError(`${form.row} must have a value before and after, was ${before} and ${after}`)
  const number = inPercent ? row.percent : change
  const values: Weighed['values'] = [
    { name: 'before', value: before, unit: row.unit },
    { name: 'after', value: after, unit: row.unit },
    { name: 'change', value: change, unit: row.unit },
  ]
  if (number === null) return untold({ kind: 'about zero', valueUv: 0 }, unit, null, values)

  const score = scoreOfRow(prepared.setting, row)
  const reference = scoreReference(score, largestAbsolute(claimed.before))
  const ofLargest = inPercent && row.percentOf === 'largest' && reference !== null
  const told = ofLargest ? [...values, { name: 'largest before', value: reference, unit: row.unit }] : values
  const holds = relation === 'at least' ? isAtLeast(Math.abs(number), amount) : isAtMost(Math.abs(number), amount)
  // what the change is divided by to get the number, where that is no noisy value itself
  const scale = !inPercent ? 1 : ofLargest ? 100 / reference : null
  const decided = decide(prepared, claimed, score, form.row, { number, before, change, amount, holds, scale })
  const answer: Weighed = {
    ...verdictOf([decided.part]),
    number,
    unit,
    interval: decided.interval,
    values: told,
    decisions: decided.part.decisions,
  }
  return withUnseen(answer, unseenOfScore(prepared, claimed, score), prepared.setting.unseenThreshold)
}

interface Held {
  readonly number: number
  readonly before: number
  readonly change: number
  readonly amount: number
  readonly holds: boolean
  readonly scale: number | null
}

function decide(
  prepared: PreparedClaim,
  claimed: ClaimedWaveform,
  score: Score,
  row: ClaimRow,
  { number, before, change, amount, holds, scale }: Held,
): { part: Part; interval: readonly [number, number] | null } {
  const bounds = amount === 0 ? [0] : [-amount, amount]
  const simple = (noise: PartNoise | null) => ({
    part: part(holds, number, bounds, noise),
    interval: intervalOf(number, noise),
  })
  if (!isMeasured(prepared, claimed)) return simple(null)
  if (scoreLinearity(score.kind) !== 'linear') {
    const { timesMs } = prepared.setting
    const noise = simulatedNoise(prepared, claimed, (x, y) => {
      const first = scoreOf(x, timesMs, score)
      const second = scoreOf(y, timesMs, score)
      if (typeof first === 'string' || typeof second === 'string') return null
      return scale === null ? (100 * (second - first)) / first : scale * (second - first)
    })
    if (noise !== 'missing') return simple(noise)
    return {
      part: { holds, told: false, trialsNeeded: null, decisions: bounds.map((b) => number - b) },
      interval: null,
    }
  }
  const w = once(prepared, `weights of ${row}`, () =>
    scoreWeights(score, prepared.setting.baseline, prepared.setting.timesMs),
  )
  const ofChange = () => [termAfter(prepared, claimed, w), termBefore(prepared, claimed, w, -1)]
  if (scale !== null) {
    const noise = linearNoise(prepared, claimed, ofChange)
    return simple(noise && { ...noise, sd: scale * noise.sd })
  }
  const covariance = covarianceOf(prepared, claimed, [ofChange(), [termBefore(prepared, claimed, w)]])
  const { trials } = prepared.setting
  const parts = bounds.map((bound) => ratioPart(holds, change, before, bound / 100, covariance, trials))
  const interval = fieller(change, before, covariance)
  return {
    part: {
      holds,
      told: parts.every(({ told }) => told),
      trialsNeeded: mostTrials(parts),
      decisions: [...bounds.map((bound) => number - bound), ...parts.map(({ decisions }) => decisions[1])],
    },
    interval: interval && [100 * interval[0], 100 * interval[1]],
  }
}

/** Whether numerator / denominator can be told from a ratio: numerator − ratio·denominator against its own noise. */
export function ratioPart(
  holds: boolean,
  numerator: number,
  denominator: number,
  ratio: number,
  [[a, c], [, b]]: readonly (readonly number[])[],
  trials: number,
): Part {
  const sd = Math.sqrt(Math.max(0, a - 2 * ratio * c + ratio * ratio * b))
  return part(holds, numerator - ratio * denominator, [0], { sd, trials })
}

/**
 * 95 % interval of a ratio of two numbers with Gaussian noise: all ratios r for which numerator − r·denominator is within 1.96 of its own standard
 * deviations of 0.
 *
 * @returns null where that is no finite interval, since the denominator cannot be told from 0.
 * @see Fieller, J. R. Stat. Soc. B 16, 175–185, 1954.
 */
export function fieller(
  numerator: number,
  denominator: number,
  [[a, c], [, b]]: readonly (readonly number[])[],
): [number, number] | null {
  const z = NORMAL_95 * NORMAL_95
  const square = denominator * denominator - z * b
  if (!(square > 0)) return null
  const middle = numerator * denominator - z * c
  const rest = numerator * numerator - z * a
  const root = Math.sqrt(Math.max(0, middle * middle - square * rest))
  return [(middle - root) / square, (middle + root) / square]
}

/** All of them must be told. */
export function mostTrials(parts: readonly Part[]): number | null {
  const needed = parts.map(({ trialsNeeded }) => trialsNeeded)
  const known = needed.filter((trials) => trials !== null)
  return known.length < needed.length ? null : Math.max(...known)
}

/** A row of the readout for the waveform that claims are about. Throws as `fidelityRows`. */
export function rowOf(setting: ClaimSetting, { before, after }: ClaimedWaveform, id: ClaimRow): FidelityRow {
  const { timesMs, score, measure } = setting
  const rows = fidelityRows({ timesMs, before, after, score, measure, onsetMs: null })
  const row = rows.find((entry) => entry.id === id)
  if (!row) throw new RangeError(`row must be one of ${rows.map((entry) => entry.id).join(', ')}, was ${id}`)
  return row
}

export function scoreOfRow({ score, measure }: ClaimSetting, row: FidelityRow): Score {
  if (row.id === 'score') return score
  const { figure, window, fraction } = row.label
  if (figure === 'false-deflection') throw new RangeError('row must be a score, was false-deflection')
  return { kind: figure, ...window, polarity: measure.polarity, ...(fraction === undefined ? {} : { fraction }) }
}

/** The answer where a row has no value before or after; null where it has both. */
export function noValue({ before, after }: FidelityRow, unit: Unit): Weighed | null {
  for (const [value, where] of [
    [before, 'before'],
    [after, 'after'],
  ] as const) {
    if (value === 'no peak' || value === 'no area' || value === 'no onset')
      return untold({ kind: 'no value', missing: value, where }, unit)
  }
  return null
}

/** Of what the filtered value hangs on: its weights, for a latency those of its moment. */
export function unseenOfScore(prepared: PreparedClaim, claimed: ClaimedWaveform, score: Score): Unseen | null {
  if (claimed.extent !== 'epochs') return null
  const { baseline, timesMs } = prepared.setting
  const { before, after } = claimed
  const traced = tracedWeights({ score, of: 'after', baseline, timesMs, before, after })
  return isTraced(traced) ? unseenOf(claimed, traced.onAfter) : null
}
