/** The cutoffs that can be dragged in the frequency figure: where each stands, how far it may go, and what dragging it says. */
import type { StageSpec } from '../filter/stage.ts'
import { stageShortName } from '../words/stage-words.ts'

export interface CutoffMark {
  /** Place of the stage in the workspace's chain, and which of its cutoffs. */
  stage: number
  edge: number
  hz: number
  /** Gain of the stage at its cutoff, by definition; null where the stated cutoff does not say it (a design cutoff). */
  gain: number | null
  minHz: number
  maxHz: number
  /** "high-pass, half-amplitude cutoff" */
  label: string
}

/** Room that a cutoff keeps to what it must not reach. */
const NEAR = 1.01

/**
 * The cutoffs of the stages that run here: those switched off or already in the data have none to drag, a moving average has none at
 * all.
 *
 * @param limits  frequencies between which a cutoff may be dragged: the ends of the axis.
 */
export function cutoffMarks(
  chain: readonly StageSpec[],
  samplingRateHz: number,
  limits: { fromHz: number; toHz: number },
): CutoffMark[] {
  return chain.flatMap((spec, stage) => {
    if (spec.enabled === false || spec.inData === true) return []
    const same = chain.filter((other) => stageShortName(other) === stageShortName(spec)).length > 1
    const name = same ? `${stageShortName(spec)} (stage ${stage + 1})` : stageShortName(spec)
    return cutoffsOf(spec).map((hz, edge, all) => {
      const half = samplingRateHz / 2
      const margin = spec.design === 'windowed-sinc' ? spec.transitionHz / 2 : 0
      const highest = spec.design === 'notch' ? half / (spec.harmonics + 1) : half - margin
      const lowest = spec.design === 'notch' && spec.harmonics > 0 ? spec.bandwidthHz : margin
      const floorHz = Math.max(limits.fromHz, lowest * NEAR, edge > 0 ? all[edge - 1] * NEAR : 0)
      const ceilingHz = Math.min(
        limits.toHz,
        highest / NEAR,
        edge + 1 < all.length ? all[edge + 1] / NEAR : limits.toHz,
      )
      const { gain, word } = meaningOf(spec)
      const side = all.length > 1 ? ['lower ', 'upper '][edge] : ''
      return {
        stage,
        edge,
        hz,
        gain,
        // a cutoff that already stands outside keeps its place until it is dragged
        minHz: Math.min(floorHz, hz),
        maxHz: Math.max(ceilingHz, hz),
        label: `${name}, ${side}${word}`,
      }
    })
  })
}

/** The chain with one cutoff set. */
export function withCutoff(spec: StageSpec, edge: number, hz: number): StageSpec {
  switch (spec.design) {
    case 'butterworth':
    case 'windowed-sinc':
      return { ...spec, cutoffsHz: spec.cutoffsHz.map((old, place) => (place === edge ? hz : old)) }
    case 'amplifier':
      return { ...spec, cutoffHz: hz }
    case 'notch':
      return { ...spec, frequencyHz: hz }
    case 'moving-average':
      return spec
  }
}

function cutoffsOf(spec: StageSpec): number[] {
  switch (spec.design) {
    case 'butterworth':
    case 'windowed-sinc':
      return spec.cutoffsHz
    case 'amplifier':
      return [spec.cutoffHz]
    case 'notch':
      return [spec.frequencyHz]
    case 'moving-average':
      return []
  }
}

function meaningOf(spec: StageSpec): { gain: number | null; word: string } {
  switch (spec.design) {
    case 'amplifier':
      return { gain: Math.SQRT1_2, word: 'half-power cutoff' }
    case 'notch':
      return { gain: 0, word: 'frequency' }
    case 'moving-average':
      return { gain: null, word: '' }
    default:
      if (spec.meaning === 'half-amplitude') return { gain: 0.5, word: 'half-amplitude cutoff' }
      if (spec.meaning === 'half-power') return { gain: Math.SQRT1_2, word: 'half-power cutoff' }
      return { gain: null, word: 'design cutoff' }
  }
}
