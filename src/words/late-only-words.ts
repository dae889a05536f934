import type { TimeWindow } from '../erp/time-axis.ts'
import type { BumpScan } from '../evidence/bump-scan.ts'
import type { LateOnlyFit } from '../evidence/late-only-fit.ts'
import type { LateOnlyVerdict } from '../evidence/late-only-verdict.ts'
import type { OnsetScan } from '../evidence/onset-scan.ts'
import type { RobustVariant, RobustVerdict } from '../evidence/robust-verdict.ts'
import { changeWithUnit, decimalsAgainst, intervalWithUnit, valueWithUnit } from './claim-number.ts'
import { brief, exact, fixed, list } from './number.ts'
import { momentWords, spanWords } from './trace-words.ts'

export interface LateOnlyFacts {
  readonly robust: Pick<RobustVerdict, 'verdict' | 'changed' | 'variants'> & {
    readonly fit: Pick<
      LateOnlyFit,
      'beta' | 'interval' | 'noiseScale' | 'alphaScale' | 'lateShare' | 'verdict' | 'conditions' | 'grounds'
    >
  }
  readonly t0Ms: number
  readonly slackMs: number
  readonly early: TimeWindow
  /** A built waveform that is taken as it stands has no noise on it. */
  readonly noiseless?: boolean
  /** σ and ℓ that the fit assumed, so that its variants can be named by what they change. */
  readonly sigmaUv: number
  readonly lengthMs: number
  /** Null where no scan was made. */
  readonly scan: Pick<OnsetScan, 'rows' | 'latestMs' | 'beyond'> | null
  /** Null or absent where early components were not sought everywhere. */
  readonly bumps?: Pick<BumpScan, 'strongest' | 'level' | 'draws' | 'criticalZ'> | null
}

/** The panel of the late-only fit, sentence by sentence, in the order in which it is read. */
export interface LateOnlyWords {
  readonly estimate: string
  /** "It can", "Not by late activity alone" or "Cannot be told". */
  readonly verdict: string
  /** The condition that decided it. */
  readonly reason: string
  readonly noise: string
  readonly alpha: string
  readonly phaseLocked: string
  readonly robust: string
  readonly scan: string | null
  readonly bumps: string | null
}

const VERDICT: Record<LateOnlyVerdict, string> = {
  'it can': 'It can',
  'not by late activity alone': 'Not by late activity alone',
  'cannot be told': 'Cannot be told',
}

/** Alpha activity that is locked to the event cannot be averaged out, and a bump of its period looks like it. */
const PHASE_LOCKED =
  'Activity at about 10 Hz that is phase-locked to the event cannot be told from an early component by this fit.'

/** The fit then takes what its activity cannot follow for noise: there is no other. */
const NOISELESS =
  'The waveform is taken as it stands, without noise: what the fit calls noise is only what its early and late activity cannot follow, and the interval is not that of a study. Taken as measured, it carries the noise of the trials.'

/** Scales of the stated noise within which it is taken to be right. */
const SCALE_LOW = 0.5
const SCALE_HIGH = 2

export function lateOnlyVerdictWords(verdict: LateOnlyVerdict): string {
  return VERDICT[verdict]
}

/** All that the panel says. Every sentence follows from the fit's numbers and is true of them whatever they are. */
export function lateOnlyWords(facts: LateOnlyFacts): LateOnlyWords {
  const { robust, scan } = facts
  return {
    estimate: estimateWords(facts),
    verdict: VERDICT[robust.verdict],
    reason: reasonWords(facts),
    noise: facts.noiseless ? NOISELESS : noiseWords(robust.fit.noiseScale),
    alpha: alphaWords(robust.fit.alphaScale, facts.noiseless === true),
    phaseLocked: PHASE_LOCKED,
    robust: robustWords(facts),
    scan: scan === null || scan.rows.length === 0 ? null : scanWords(scan),
    bumps: facts.bumps ? bumpScanWords(facts.bumps) : null,
  }
}

function estimateWords({ robust: { fit }, early }: LateOnlyFacts): string {
  const zero = fit.conditions.intervalExcludesZero ? 'which excludes zero' : 'which includes zero'
  return (
    `Estimated early activity from ${spanWords(early.fromMs, early.toMs)}: ${changeWithUnit(fit.beta, 'µV', [0])} ` +
    `(95 % interval ${intervalWithUnit(fit.interval, 'µV', [0])}, ${zero}), as the peak of a raised cosine in the unfiltered signal.`
  )
}

function reasonWords(facts: LateOnlyFacts): string {
  const { robust, t0Ms, slackMs } = facts
  const onset = slackMs > 0 ? `${momentWords(t0Ms)} less ${exact(slackMs)} ms` : momentWords(t0Ms)
  const { conditions, grounds, verdict } = robust.fit
  const decided = (() => {
    switch (verdict) {
      case 'not by late activity alone':
        return `The interval excludes zero: activity that begins no earlier than ${onset} does not account for the deflection by itself.`
      case 'it can':
        return (
          `The interval includes zero, and activity that begins no earlier than ${onset} makes ${percent(grounds.lateShare, 50)} of the deflection’s mean ` +
          `(at least half was asked for). That it can does not prove that it did.`
        )
      case 'cannot be told':
        return `The interval includes zero, but ${list(failed(conditions, grounds))}.`
    }
  })()
  return robust.changed && verdict !== 'cannot be told'
    ? `${decided} This does not stand, because another assumption about late activity changes the verdict.`
    : decided
}

/** The conditions of "it can" that failed, each with its numbers. */
function failed(
  { intervalIsNarrow, deflectionExceedsNoise, lateMakesHalf }: LateOnlyFit['conditions'],
  { interval, largestUv, meanUv, noiseOfMeanUv, lateShare }: LateOnlyFit['grounds'],
): string[] {
  const width = interval[1] - interval[0]
  return [
    ...(intervalIsNarrow
      ? []
      : [
          `it is ${valueWithUnit(width, 'µV', [largestUv])} wide, no narrower than the deflection is large (${valueWithUnit(largestUv, 'µV', [width])})`,
        ]),
    ...(deflectionExceedsNoise
      ? []
      : [
          `the deflection’s mean, ${valueWithUnit(meanUv, 'µV')}, does not stand out from its noise (1.96 standard deviations are ${valueWithUnit(1.959963984540054 * noiseOfMeanUv, 'µV', [Math.abs(meanUv)])})`,
        ]),
    ...(lateMakesHalf
      ? []
      : [`late activity makes only ${percent(lateShare, 50)} of the deflection’s mean, less than half`]),
  ]
}

function percent(share: number, against: number): string {
  const value = 100 * share
  const whole = Math.sign(Math.round(value) - against) === Math.sign(value - against)
  return whole ? `${fixed(value, 0)} %` : `${fixed(value, decimalsAgainst(value, '%', [against]))} %`
}

function noiseWords(scale: number): string {
  const said = brief(scale, against(scale, [SCALE_LOW, SCALE_HIGH]))
  if (scale > SCALE_HIGH)
    return `The noise was found to be ${said} times the stated noise in power (s), more than twice: the stated noise, its trials or its chain may be wrong.`
  if (scale < SCALE_LOW)
    return `The noise was found to be ${said} times the stated noise in power (s), less than half: the stated noise, its trials or its chain may be wrong.`
  return `The noise was found to be ${said} times the stated noise in power (s).`
}

function against(value: number, amounts: readonly number[]): number {
  let digits = 2
  while (
    digits < 12 &&
    !amounts.every((amount) => Math.sign(Number(value.toPrecision(digits)) - amount) === Math.sign(value - amount))
  )
    digits++
  return digits
}

function alphaWords(scale: number, noiseless: boolean): string {
  if (noiseless)
    return scale === 0
      ? 'None of that looks like alpha activity (a = 0 µV²/Hz).'
      : 'Some of that it takes for alpha activity (a).'
  if (scale === 0) return 'No alpha activity beyond the stated noise was found (a = 0 µV²/Hz).'
  return `Alpha activity beyond the stated noise: ${brief(scale, 2)} µV²/Hz at 10 Hz in single trials (a).`
}

function robustWords({ robust: { variants, fit, changed }, sigmaUv, lengthMs }: LateOnlyFacts): string {
  if (variants.length === 0) return 'Whether the verdict hangs on what is assumed of late activity was not checked.'
  const said = variants.map((variant) => {
    const verdict = `“${VERDICT[variant.verdict].toLowerCase()}”`
    return `with ${variantWords(variant, sigmaUv, lengthMs)} it is ${verdict} (${changeWithUnit(variant.beta, 'µV', [0])}, 95 % interval ${intervalWithUnit(variant.interval, 'µV', [0])})`
  })
  const own = `“${VERDICT[fit.verdict].toLowerCase()}”`
  return changed
    ? `The verdict hangs on what is assumed of late activity, and so cannot be told: as assumed it is ${own}, ${list(said)}.`
    : `The verdict does not hang on what is assumed of late activity, as far as was tried: ${list(said)}.`
}

function variantWords(variant: RobustVariant, sigmaUv: number, lengthMs: number): string {
  const parts = [
    ...(variant.sigmaUv === sigmaUv
      ? []
      : [`late activity ${brief(variant.sigmaUv / sigmaUv, 3)} times as large (σ ${exact(variant.sigmaUv)} µV)`]),
    ...(variant.lengthMs === lengthMs
      ? []
      : [`late activity ${brief(variant.lengthMs / lengthMs, 3)} times as smooth (ℓ ${exact(variant.lengthMs)} ms)`]),
  ]
  return parts.length === 0 ? 'late activity as assumed' : list(parts)
}

const RULED_OUT: LateOnlyVerdict = 'not by late activity alone'

function scanWords({ rows, latestMs, beyond }: NonNullable<LateOnlyFacts['scan']>): string {
  const range =
    rows.length === 1
      ? `One assumed onset was tried, ${momentWords(rows[0].t0Ms)}`
      : `Of ${exact(rows.length)} assumed onsets from ${spanWords(rows[0].t0Ms, rows[rows.length - 1].t0Ms)}`
  if (beyond === 'before the scan' || latestMs === null)
    return rows.length === 1
      ? `${range}: late activity alone is ruled out there.`
      : `${range} already the earliest is ruled out: late activity alone does not account for the deflection from there on.`
  if (beyond === 'after the scan')
    return rows.length === 1
      ? `${range}: late activity alone is not ruled out there.`
      : `${range} none is ruled out by the fit: the latest onset that the data allow lies at ${momentWords(latestMs)} or later.`
  const next = rows.find(({ t0Ms }) => t0Ms > latestMs)
  const until = next ? `; at the next, ${momentWords(next.t0Ms)}, late activity alone is ruled out` : ''
  const again = next ? rows.filter(({ t0Ms, verdict }) => t0Ms > next.t0Ms && verdict !== RULED_OUT).length : 0
  const later = again === 0 ? '' : again === 1 ? ', at one later one not' : `, at ${exact(again)} later ones not`
  // where the verdicts do not change once for all, the latest that is allowed is no single moment
  const latest = again === 0 ? 'the latest that the data allow' : 'the latest before the first that is ruled out'
  return `${range}, ${latest} is ${momentWords(latestMs)}${until}${later}.`
}

/** The strongest early component anywhere before the late activity, and how often noise alone finds one as strong. */
function bumpScanWords({ strongest, level, draws, criticalZ }: NonNullable<LateOnlyFacts['bumps']>): string {
  const { fromMs, toMs, amplitudeUv, z } = strongest
  const often = level <= 0.05 ? 'which chance alone rarely makes' : 'so that chance alone may have made it'
  return (
    `Of early components of several widths and places, the strongest lies from ${spanWords(fromMs, toMs)}: ` +
    `${changeWithUnit(amplitudeUv, 'µV', [0])} (|z| = ${fixed(Math.abs(z), 1)}). In ${exact(draws)} simulated waveforms without early activity, ` +
    `${fixed(100 * level, level < 0.01 ? 2 : 1)} % had one at least as strong (5 % exceed |z| = ${fixed(criticalZ, 1)}), ${often}.`
  )
}
