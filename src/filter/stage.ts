import { amplifierSections, checkAmplifier } from './amplifier.ts'
import { butterworthSections, checkButterworth } from './butterworth.ts'
import { butterworthDesignEdges } from './cutoff-meaning.ts'
import { minimumPhase } from './minimum-phase.ts'
import { checkMovingAverage, movingAverageTaps } from './moving-average.ts'
import { checkNotch, notchSections } from './notch.ts'
import type { Sections } from './second-order-sections.ts'
import { checkChoice, checkSamplingRate, said } from './spec-error.ts'
import { passesOf } from './warped-axis.ts'
import { checkWindowedSinc, windowedSincTaps } from './windowed-sinc.ts'

/**
 * A stage is one filter of a chain: what the user says about it (`StageSpec`) and what follows for one sampling
 * rate (`Stage`). Conventions of this room: frequencies in Hz, the sampling rate is always an argument, `order` is the
 * order of ONE pass, `taps` is a number of samples (order + 1), arrays are Float64Array, arguments are never changed.
 */

export type Pass = 'low' | 'high' | 'band' | 'stop'
/** 'forward' is causal; 'both' runs forward and backward and is zero-phase. */
export type Direction = 'forward' | 'both'
/** The first two are meant as applied (after all passes of the stage); 'design' is the single-pass design cutoff. */
export type CutoffMeaning = 'half-amplitude' | 'half-power' | 'design'
export type Delay = 'compensated' | 'causal' | 'minimum-phase'
export type WindowSpec =
  | { name: 'rectangular' | 'hann' | 'hamming' | 'blackman' }
  | { name: 'kaiser'; attenuationDb: number }

export interface ButterworthSpec {
  design: 'butterworth'
  pass: Pass
  order: number
  /** One cutoff for low and high, two ascending ones for band and stop. */
  cutoffsHz: number[]
  meaning: CutoffMeaning
  direction: Direction
}
export interface WindowedSincSpec {
  design: 'windowed-sinc'
  pass: Pass
  cutoffsHz: number[]
  meaning: CutoffMeaning
  transitionHz: number
  window: WindowSpec
  delay: Delay
}
/** Half-power cutoff; always forward, always before the offline stages. */
export interface AmplifierSpec {
  design: 'amplifier'
  pass: 'low' | 'high'
  order: number
  cutoffHz: number
}
/** `bandwidthHz` is the -3 dB width as applied. */
export interface NotchSpec {
  design: 'notch'
  frequencyHz: number
  bandwidthHz: number
  harmonics: number
  direction: Direction
}
export interface MovingAverageSpec {
  design: 'moving-average'
  durationMs: number
  delay: 'compensated' | 'causal'
}

/** `enabled` is true and `inData` false where absent. A stage in the data has already acted and is not run again. */
export type StageSpec = { enabled?: boolean; inData?: boolean } & (
  | ButterworthSpec
  | WindowedSincSpec
  | AmplifierSpec
  | NotchSpec
  | MovingAverageSpec
)

/**
 * One designed stage.
 *
 * - `sections` and `analogue` describe the same recursive filter, row by row (a FIR stage has null for both).
 *   `sections`: rows b0 b1 b2 a0 a1 a2 of ONE pass, a0 = 1, in the order and with the gain where SciPy's
 *   `butter(..., output='sos')` has them. `analogue`: rows c2 c1 c0 d2 d1 d0 of
 *   (c2·σ² + c1·σ + c0) / (d2·σ² + d1·σ + d0) in the bilinear variable σ = (1 − z⁻¹)/(1 + z⁻¹), on the unit
 *   circle σ = j·tan(πf/fs); d2 = 1, or d2 = 0 and d1 = 1 for a first-order row. Poles near z = 1 keep their full precision here,
 *   so responses and low-cutoff filtering use this form.
 * - `taps`: the kernel of a FIR stage (null for a recursive one), and `leadSamples` how many samples it is moved
 *   earlier: y[n] = Σ taps[k]·x[n + leadSamples − k]. (taps − 1)/2 when the delay is compensated, else 0.
 * - `passes`: 2 when it runs forward and backward, else 1. FIR stages always have 1.
 */
export interface Stage {
  readonly spec: StageSpec
  readonly samplingRateHz: number
  readonly sections: Float64Array | null
  readonly analogue: Float64Array | null
  readonly taps: Float64Array | null
  readonly leadSamples: number
  readonly passes: 1 | 2
}

/**
 * Designs one stage.
 *
 * @param spec            what the user says about it; not changed, and kept in the stage as it is.
 * @param samplingRateHz  samples per second, positive.
 * @throws RangeError     with what, rule and value, and the faulty property's name in `field`, for anything that cannot
 *                        be designed.
 */
export function designStage(spec: StageSpec, samplingRateHz: number): Stage {
  checkSamplingRate(samplingRateHz)
  if (spec === null || typeof spec !== 'object') throw new RangeError(`a stage must be an object, was ${said(spec)}`)
  switch (spec.design) {
    case 'butterworth': {
      checkButterworth(spec, samplingRateHz)
      const edges = butterworthDesignEdges(spec, samplingRateHz)
      const sections = butterworthSections(spec.pass, spec.order, edges)
      return recursive(spec, samplingRateHz, sections, passesOf(spec.direction))
    }
    case 'amplifier':
      checkAmplifier(spec, samplingRateHz)
      return recursive(spec, samplingRateHz, amplifierSections(spec, samplingRateHz), 1)
    case 'notch':
      checkNotch(spec, samplingRateHz)
      return recursive(spec, samplingRateHz, notchSections(spec, samplingRateHz), passesOf(spec.direction))
    case 'windowed-sinc': {
      checkWindowedSinc(spec, samplingRateHz)
      const symmetric = windowedSincTaps(spec, samplingRateHz)
      const zeroAtDc = spec.pass === 'high' || spec.pass === 'band'
      const taps = spec.delay === 'minimum-phase' ? minimumPhase(symmetric, zeroAtDc) : symmetric
      return finite(spec, samplingRateHz, taps, spec.delay === 'compensated')
    }
    case 'moving-average': {
      checkMovingAverage(spec, samplingRateHz)
      return finite(spec, samplingRateHz, movingAverageTaps(spec, samplingRateHz), spec.delay === 'compensated')
    }
    default:
      checkChoice('design', (spec as { design: unknown }).design, [
        'butterworth',
        'windowed-sinc',
        'amplifier',
        'notch',
        'moving-average',
      ])
      throw new RangeError('unreachable')
  }
}

function recursive(spec: StageSpec, samplingRateHz: number, designed: Sections, passes: 1 | 2): Stage {
  return { spec, samplingRateHz, ...designed, taps: null, leadSamples: 0, passes }
}

function finite(spec: StageSpec, samplingRateHz: number, taps: Float64Array, compensated: boolean): Stage {
  const leadSamples = compensated ? (taps.length - 1) / 2 : 0
  return { spec, samplingRateHz, sections: null, analogue: null, taps, leadSamples, passes: 1 }
}
