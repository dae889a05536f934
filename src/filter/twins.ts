import { designCutoffsHz } from './cutoff-meaning.ts'
import { notchDesignBandwidthHz } from './notch.ts'
import { designStage, type StageSpec } from './stage.ts'

/**
 * The causal twin of a stage: a recursive stage that runs both ways becomes its sections run forward twice (two forward
 * stages at the design cutoffs, a notch at its design width), so with the same gain; a compensated windowed sinc its
 * minimum-phase form; a moving average its causal form. A stage that is causal is its own twin.
 *
 * @returns  one or two stages; `enabled` and `inData` as in the stage given.
 * @throws RangeError for a stage that cannot be designed.
 */
export function causalTwin(spec: StageSpec, samplingRateHz: number): StageSpec[] {
  designStage(spec, samplingRateHz)
  switch (spec.design) {
    case 'butterworth': {
      if (spec.direction === 'forward') return [spec]
      const cutoffsHz = designCutoffsHz(spec, samplingRateHz)
      const once: StageSpec = { ...spec, cutoffsHz, meaning: 'design', direction: 'forward' }
      return [once, { ...once, cutoffsHz: [...cutoffsHz] }]
    }
    case 'notch': {
      if (spec.direction === 'forward') return [spec]
      const bandwidthHz = notchDesignBandwidthHz(spec, samplingRateHz)
      const once: StageSpec = { ...spec, bandwidthHz, direction: 'forward' }
      return [once, { ...once }]
    }
    case 'windowed-sinc':
      return spec.delay === 'compensated' ? [{ ...spec, delay: 'minimum-phase' }] : [spec]
    case 'moving-average':
      return spec.delay === 'compensated' ? [{ ...spec, delay: 'causal' }] : [spec]
    case 'amplifier':
      return [spec]
  }
}

/**
 * The zero-phase twin of a stage: a forward recursive stage becomes one of the same order per pass and the same cutoffs as
 * applied (half-power where they were stated as design cutoffs), run both ways, so that its roll-off doubles; a causal kernel the
 * compensated one. A stage that is zero-phase is its own twin, and so is an amplifier stage, which has none.
 *
 * @returns  one stage; `enabled` and `inData` as in the stage given.
 * @throws RangeError for a stage that cannot be designed.
 */
export function zeroPhaseTwin(spec: StageSpec, samplingRateHz: number): StageSpec[] {
  designStage(spec, samplingRateHz)
  switch (spec.design) {
    case 'butterworth':
      if (spec.direction === 'both') return [spec]
      return [{ ...spec, meaning: spec.meaning === 'design' ? 'half-power' : spec.meaning, direction: 'both' }]
    case 'notch':
      return spec.direction === 'both' ? [spec] : [{ ...spec, direction: 'both' }]
    case 'windowed-sinc':
    case 'moving-average':
      return spec.delay === 'compensated' ? [spec] : [{ ...spec, delay: 'compensated' }]
    case 'amplifier':
      return [spec]
  }
}
