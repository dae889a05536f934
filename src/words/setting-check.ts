import type { Stage } from '../filter/stage.ts'
import { bounds, type ChainBand, DB_PER_POLE, polesAtEnd } from './chain-band.ts'
import { brief, exact } from './number.ts'
import { counted } from './write-up-facts.ts'

/** Single requirements of published settings, held against the stages that a waveform has passed. */

export type Verdict = 'kept' | 'not kept' | 'cannot be told'

/** What the checks look at. */
export interface Looked {
  readonly all: readonly Stage[]
  readonly amplifiers: readonly Stage[]
  readonly band: ChainBand
  readonly halfRateHz: number
  /** Whether the amplifier of recorded data may have bounded the band in a way that no stage states, by end of the band. */
  readonly unknown: Readonly<Record<'low' | 'high', boolean>>
}

/** What came of a check. */
export interface Finding {
  readonly verdict: Verdict
  /** What the chain has, in words. */
  readonly found: string
  /** How far the chain is beyond the limit; null where the setting is kept or cannot be told, or where no number says it. */
  readonly byHowMuch: {
    readonly words: string
    readonly value: number
    readonly unit: 'Hz' | 'dB/octave' | 'stages'
  } | null
}

/** Cutoffs are met to so much of their value. */
const TOLERANCE = 1e-6
const isAbove = (value: number, limit: number) => value > limit * (1 + TOLERANCE)
const isBelow = (value: number, limit: number) => value < limit * (1 - TOLERANCE)
const hz = (value: number) => `${brief(value, 5)} Hz`

const UNKNOWN = {
  low: 'the amplifier’s own high-pass is not among the stages',
  high: 'the amplifier’s own low-pass is not among the stages',
} as const

const kept = (found: string): Finding => ({ verdict: 'kept', found, byHowMuch: null })
const cannotBeTold = (found: string): Finding => ({ verdict: 'cannot be told', found, byHowMuch: null })
const notKept = (found: string, value: number, unit: 'Hz' | 'dB/octave' | 'stages', words: string): Finding => ({
  verdict: 'not kept',
  found,
  byHowMuch: { words, value, unit },
})
const NEVER_PASSES: Finding = {
  verdict: 'not kept',
  found: 'the gain of all filters together never reaches half power',
  byHowMuch: null,
}

/** A further filter can only raise the corner, so that what is too high stays so whatever else has acted. */
export function lowCorner({ band, unknown }: Looked, fromHz: number, toHz: number): Finding {
  if (!band.passes) return NEVER_PASSES
  const low = band.lowHz ?? 0
  const found = band.lowHz === null ? 'no high-pass' : `half-power point at ${hz(low)}`
  if (isAbove(low, toHz)) return notKept(found, low - toHz, 'Hz', `${hz(low - toHz)} above ${hz(toHz)}`)
  if (unknown.low) return cannotBeTold(`${found}; ${UNKNOWN.low}`)
  if (isBelow(low, fromHz)) return notKept(found, fromHz - low, 'Hz', `${hz(fromHz - low)} below ${hz(fromHz)}`)
  return kept(found)
}

/** As `lowCorner` up to a limit, for a source that does not say which gain its cutoff means. */
export function lowCornerOfUnsaidGain(looked: Looked, toHz: number): Finding {
  const finding = lowCorner(looked, 0, toHz)
  const { lowHz, lowHalfAmplitudeHz } = looked.band
  if (finding.verdict !== 'not kept' || lowHz === null || isAbove(lowHalfAmplitudeHz ?? 0, toHz)) return finding
  const half =
    lowHalfAmplitudeHz === null ? 'no half-amplitude point' : `half-amplitude point at ${hz(lowHalfAmplitudeHz)}`
  return cannotBeTold(`${finding.found}, ${half}; the source does not say which of them it limits`)
}

/** A further filter can only lower the corner. Without a low-pass the sampling rate ends the band. */
export function highCorner({ band, halfRateHz, unknown }: Looked, fromHz: number, toHz: number): Finding {
  if (!band.passes) return NEVER_PASSES
  const high = band.highHz ?? halfRateHz
  const found =
    band.highHz === null
      ? `no low-pass below half the sampling rate (${hz(halfRateHz)})`
      : `half-power point at ${hz(high)}`
  if (isBelow(high, fromHz)) return notKept(found, fromHz - high, 'Hz', `${hz(fromHz - high)} below ${hz(fromHz)}`)
  if (unknown.high) return cannotBeTold(`${found}; ${UNKNOWN.high}`)
  if (isAbove(high, toHz)) return notKept(found, high - toHz, 'Hz', `${hz(high - toHz)} above ${hz(toHz)}`)
  if (band.highHz === null && toHz < Infinity) return cannotBeTold(`${found}, which itself lies in the range`)
  return kept(found)
}

/** Slopes are published as 6 dB per octave for each order, which is 6.02. */
const NOMINAL_DB = 6

export function slopeAtMost({ amplifiers, unknown }: Looked, end: 'low' | 'high', limitDb: number): Finding {
  if (unknown[end]) return cannotBeTold(UNKNOWN[end])
  const poles = polesAtEnd(amplifiers, end)
  if (poles === 0) return kept(`no amplifier ${end === 'low' ? 'high-pass' : 'low-pass'}`)
  const found = `${brief(poles * DB_PER_POLE, 4)} dB per octave (${orderWords(poles)})`
  const beyond = poles - limitDb / NOMINAL_DB
  if (beyond <= 0) return kept(found)
  const value = beyond * DB_PER_POLE
  return notKept(found, value, 'dB/octave', `${brief(value, 4)} dB per octave steeper`)
}

export function orderAtMost({ all, unknown }: Looked, end: 'low' | 'high', limit: number): Finding {
  const poles = polesAtEnd(all, end)
  const name = end === 'low' ? 'high-pass' : 'low-pass'
  const found = poles === 0 ? `no recursive ${name}` : `${orderWords(poles)} in all passes together`
  if (poles > limit) {
    const value = (poles - limit) * DB_PER_POLE
    return notKept(found, value, 'dB/octave', `${brief(value, 4)} dB per octave steeper`)
  }
  if (unknown[end]) return cannotBeTold(`${found}; ${UNKNOWN[end]}`)
  const finite = all.some((stage) => stage.taps !== null && bounds(stage, end))
  if (finite) return cannotBeTold(`${found}; a finite impulse response has no order in this sense`)
  return kept(found)
}

function orderWords(poles: number): string {
  return `order ${exact(poles)}`
}

export function noNotch({ all, unknown }: Looked): Finding {
  const notches = all.filter(({ spec }) => spec.design === 'notch' || isBandStop(spec))
  if (notches.length > 0) {
    const found = `${counted(notches.length, 'notch or band-stop stage')}`
    return notKept(found, notches.length, 'stages', `${counted(notches.length, 'stage')} too many`)
  }
  if (all.some(({ spec }) => spec.design === 'moving-average'))
    return cannotBeTold(
      'a moving average, whose nulls are evenly spaced; whether that counts as a comb filter is not said',
    )
  if (unknown.low && unknown.high)
    return cannotBeTold('no notch among the stages; the amplifier’s own filters are not among them')
  return kept('no notch and no band-stop among the stages')
}

function isBandStop(spec: Stage['spec']): boolean {
  return (spec.design === 'butterworth' || spec.design === 'windowed-sinc') && spec.pass === 'stop'
}
