import { hzToTimeConstant } from '../filter/amplifier.ts'
import { designCutoffsHz } from '../filter/cutoff-meaning.ts'
import { type CutoffPoints, stageCutoffPoints } from '../filter/cutoff-points.ts'
import { epochPaddingSamples } from '../filter/epoch-rules.ts'
import { movingAverageSamples } from '../filter/moving-average.ts'
import { notchDesignBandwidthHz } from '../filter/notch.ts'
import type { NotchSpec, Stage, WindowSpec } from '../filter/stage.ts'
import { kaiserBeta } from '../filter/window.ts'
import { brief, exact, list } from './number.ts'
import { PASS_WORD, WINDOW_WORD } from './stage-words.ts'
import { counted, type Ends } from './write-up-facts.ts'

/**
 * One stage as a methods section reports it: a noun phrase with its article, which stands after "passed" and after "had passed" alike.
 * Every number comes from the stage as designed; a number that the user stated is printed as it was stated.
 */

/** Significant digits of numbers that follow from the design. */
const DIGITS = 5
/** A computed value this close to a stated one is that one. */
const SAME = 1e-6

/** What there is to be said of one stage, phrase by phrase; nouns have their articles. */
export interface StagePhrases {
  /** "a Butterworth high-pass filter" */
  readonly name: string
  /** "order 2 per pass (order 4 as applied)", "95 taps (order 94)" */
  readonly order: string
  /** Direction, phase and delay, as a participle: "realised as second-order sections and run …". */
  readonly run: string
  /** "a Kaiser window (…)"; null where there is none. */
  readonly window: string | null
  readonly cutoffs: string
  /** The single-pass cutoff or the centre of the transition; null where there is none. */
  readonly design: string | null
  /** Roll-off, transition width, bandwidth or nulls, by design. */
  readonly rollOff: string
  /** What stands beside the cutoffs: an amplifier's time constant. */
  readonly beside: readonly string[]
}

export function stageReport(stage: Stage, ends: Ends): string {
  const { name, order, run, window, cutoffs, design, rollOff, beside } = stagePhrases(stage)
  const has = [window, ...beside, cutoffs, design, rollOff].filter((phrase) => phrase !== null)
  const all = `with ${has.slice(0, -1).join(', ')}, and ${has[has.length - 1]}`
  // the name of a notch ends with its frequencies
  const ordered = stage.spec.design === 'notch' ? `${name}, ${order}` : `${name} of ${order}`
  return [ordered, run, ...endsWords(stage, ends), all].join(', ')
}

export function stagePhrases(stage: Stage): StagePhrases {
  const { spec, samplingRateHz, passes } = stage
  const points = stageCutoffPoints(stage)
  switch (spec.design) {
    case 'butterworth': {
      const edge = spec.cutoffsHz.length === 2 ? ' per edge' : ''
      const perPass = edge === '' ? ' per pass' : ' per edge and pass'
      return {
        name: `a Butterworth ${PASS_WORD[spec.pass]} filter`,
        order:
          passes === 2
            ? `order ${exact(spec.order)}${perPass} (order ${exact(2 * spec.order)}${edge} as applied)`
            : `order ${exact(spec.order)}${edge} (one pass)`,
        run: directionWords(passes),
        window: null,
        cutoffs: cutoffWords(points, spec.cutoffsHz, passes),
        design: designWords(designCutoffsHz(spec, samplingRateHz), spec.cutoffsHz, 'half power of a single pass'),
        rollOff: `a roll-off approaching ${slope(points)} dB per octave${edge} as applied`,
        beside: [],
      }
    }
    case 'windowed-sinc': {
      const taps = (stage.taps as Float64Array).length
      return {
        name: `a windowed-sinc finite-impulse-response ${PASS_WORD[spec.pass]} filter`,
        order: `${counted(taps, 'tap')} (order ${exact(taps - 1)}, one pass)`,
        run: delayWords(stage, spec.delay),
        window: windowPhrase(spec.window),
        cutoffs: cutoffWords(points, spec.cutoffsHz, 1),
        design: designWords(designCutoffsHz(spec, samplingRateHz), spec.cutoffsHz, 'centre of the transition'),
        rollOff: `a transition width of ${exact(spec.transitionHz)} Hz`,
        beside: [],
      }
    }
    case 'amplifier':
      return {
        name: `an amplifier ${PASS_WORD[spec.pass]} filter`,
        order: `order ${exact(spec.order)} (one pass)`,
        run: 'causal',
        window: null,
        // a cutoff that follows from a time constant has more digits than anyone said
        cutoffs: cutoffWords(points, Number(spec.cutoffHz.toPrecision(6)) === spec.cutoffHz ? [spec.cutoffHz] : [], 1),
        design: null,
        rollOff: `a roll-off approaching ${slope(points)} dB per octave as applied`,
        beside:
          spec.pass === 'high' && spec.order === 1
            ? [`a time constant of ${brief(hzToTimeConstant(spec.cutoffHz), DIGITS)} s`]
            : [],
      }
    case 'notch': {
      const single = brief(notchDesignBandwidthHz(spec, samplingRateHz), DIGITS)
      return {
        name: notchWords(spec),
        order: `${spec.harmonics > 0 ? 'each ' : ''}of order 2${passes === 2 ? ' per pass (order 4 as applied)' : ' (one pass)'}`,
        run: directionWords(passes),
        window: null,
        cutoffs: notchCutoffs(points, spec, passes),
        design: null,
        rollOff: `a half-power bandwidth${spec.harmonics > 0 ? ' per notch' : ''} of ${exact(spec.bandwidthHz)} Hz as applied${
          passes === 2 ? ` (${single} Hz in a single pass)` : ''
        }`,
        beside: [],
      }
    }
    case 'moving-average': {
      const samples = movingAverageSamples(spec.durationMs, samplingRateHz)
      const taps = (stage.taps as Float64Array).length
      return {
        name: `a moving average over ${lengthWords(samples, samplingRateHz)}`,
        order: `${counted(taps, 'tap')} (order ${exact(taps - 1)}, one pass${taps > samples ? '; the first and the last tap halved' : ''})`,
        run: delayWords(stage, spec.delay),
        window: null,
        cutoffs: cutoffWords(points, [], 1),
        design: null,
        rollOff: `nulls at the multiples of ${brief(samplingRateHz / samples, DIGITS)} Hz`,
        beside: [],
      }
    }
  }
}

/** More notches than these are not listed one by one. */
const LISTED_NOTCHES = 4

function notchWords({ frequencyHz, harmonics }: NotchSpec): string {
  const at = (k: number) => exact(frequencyHz * (k + 1))
  if (harmonics === 0) return `a notch filter at ${at(0)} Hz without harmonics`
  if (harmonics < LISTED_NOTCHES) {
    const centres = Array.from({ length: harmonics + 1 }, (_, k) => at(k))
    return `a set of notch filters at ${list(centres)} Hz (${at(0)} Hz and ${counted(harmonics, 'harmonic')})`
  }
  return `a set of notch filters at ${at(0)} Hz and its ${counted(harmonics, 'harmonic')} up to ${at(harmonics)} Hz`
}

function notchCutoffs(points: CutoffPoints, { harmonics }: NotchSpec, passes: 1 | 2): string {
  if (harmonics < LISTED_NOTCHES) return cutoffWords(points, [], passes)
  const { halfAmplitudeHz, halfPowerHz } = points
  const first = { ...points, halfAmplitudeHz: halfAmplitudeHz.slice(0, 2), halfPowerHz: halfPowerHz.slice(0, 2) }
  return `${cutoffWords(first, [], passes)} in the lowest notch`
}

function windowPhrase(window: WindowSpec): string {
  if (window.name !== 'kaiser') return `a ${WINDOW_WORD[window.name]} window`
  const beta = brief(kaiserBeta(window.attenuationDb), DIGITS)
  return `a Kaiser window (attenuation ${exact(window.attenuationDb)} dB, β = ${beta})`
}

/** "12 samples (24 ms)" */
export function lengthWords(samples: number, samplingRateHz: number): string {
  return `${counted(samples, 'sample')} (${brief((1000 * samples) / samplingRateHz, DIGITS)} ms)`
}

function directionWords(passes: 1 | 2): string {
  return passes === 2
    ? 'realised as second-order sections and run forward and backward (zero phase, no delay)'
    : 'realised as second-order sections and run forward only (causal, its delay left in)'
}

function delayWords({ leadSamples, samplingRateHz, taps }: Stage, delay: 'compensated' | 'causal' | 'minimum-phase') {
  if (delay === 'compensated')
    return `symmetric, its delay of ${lengthWords(leadSamples, samplingRateHz)} compensated (zero phase)`
  if (delay === 'minimum-phase') return 'brought to minimum phase by the homomorphic method (causal, its delay left in)'
  const halves = (taps as Float64Array).length - 1
  const samples = `${brief(halves / 2, DIGITS)} ${halves === 2 ? 'sample' : 'samples'}`
  return `symmetric, its delay of ${samples} (${brief((500 * halves) / samplingRateHz, DIGITS)} ms) left in (causal, linear phase)`
}

function slope({ rollOff }: CutoffPoints): string {
  return rollOff.kind === 'dB/octave' ? brief(rollOff.value, 4) : ''
}

/** Both readings of a cutoff, each with the gain that it means, after all passes. */
function cutoffWords(points: CutoffPoints, stated: readonly number[], passes: 1 | 2): string {
  const after = passes === 2 ? 'after both passes' : 'as applied'
  return `${pointWords('half-amplitude', points.halfAmplitudeHz, stated)} (gain 1/2) and ${pointWords('half-power', points.halfPowerHz, stated)} (gain 1/√2) ${after}`
}

function pointWords(name: string, hz: readonly number[], stated: readonly number[]): string {
  if (hz.length === 0) return `no ${name} cutoff`
  return `${hz.length === 1 ? `a ${name} cutoff` : `${name} cutoffs`} of ${cutoffList(hz, stated)} Hz`
}

function designWords(hz: readonly number[], stated: readonly number[], meaning: string): string {
  return `${hz.length === 1 ? 'a design cutoff' : 'design cutoffs'} of ${cutoffList(hz, stated)} Hz (${meaning})`
}

/** "0.1 and 30" */
export function cutoffList(hz: readonly number[], stated: readonly number[]): string {
  return list(
    hz.map((value) => {
      const said = stated.find((other) => Math.abs(other - value) <= SAME * value)
      return said === undefined ? brief(value, DIGITS) : exact(said)
    }),
  )
}

/** How the stage handled the ends of its input; nothing for an amplifier, which never meets them. */
export function endsWords(stage: Stage, ends: Ends): string[] {
  const { spec, passes, taps, samplingRateHz } = stage
  if (ends === 'none' || spec.design === 'amplifier') return []
  const whole = ends === 'epoch' ? 'the epoch' : 'each uninterrupted stretch'
  const padding = epochPaddingSamples(stage)
  const length = lengthWords(padding, samplingRateHz)
  if (taps)
    return [`padded by odd reflection of ${length} at ${stage.leadSamples > 0 ? 'both ends' : 'the start'} of ${whole}`]
  if (passes === 2)
    return [
      `padded by odd reflection of ${length} at both ends of ${whole} and started in each pass in the steady state of its first sample`,
    ]
  return [`not padded but started in the steady state of the first sample of ${whole}`]
}
