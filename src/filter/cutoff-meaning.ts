import { notchWarpedEdges } from './notch.ts'
import { checkCutoffs } from './spec-error.ts'
import type { ButterworthSpec, CutoffMeaning, StageSpec } from './stage.ts'
import { edgesHz, passesOf, scaleEdges, type WarpedEdges, warpedEdges, warpedRatio } from './warped-axis.ts'
import { nominalCutoffsHz } from './windowed-sinc.ts'

/** Gain that a cutoff stands for; null for a design cutoff, which needs no correction. */
export function gainOfMeaning(meaning: CutoffMeaning): number | null {
  return meaning === 'half-amplitude' ? 0.5 : meaning === 'half-power' ? Math.SQRT1_2 : null
}

/** Warped single-pass design edges of a Butterworth stage whose cutoffs may be stated as applied. */
export function butterworthDesignEdges(spec: ButterworthSpec, samplingRateHz: number): WarpedEdges {
  const stated = warpedEdges(spec.pass, spec.cutoffsHz, samplingRateHz)
  const gain = gainOfMeaning(spec.meaning)
  if (gain === null) return stated
  return scaleEdges(spec.pass, stated, 1 / warpedRatio(gain, passesOf(spec.direction), spec.order))
}

/**
 * Design cutoffs in Hz of a stage whose cutoffs may be stated as applied: single-pass half-power points for a
 * Butterworth, an amplifier and a notch (the lower and upper edge of its first notch), the nominal centres of
 * the transitions for a windowed sinc, none for a moving average.
 *
 * @param spec            a valid stage; see `designStage` for the checks.
 * @param samplingRateHz  samples per second.
 * @throws RangeError     for cutoffs outside 0 to half the sampling rate, or where a windowed sinc cannot meet them.
 */
export function designCutoffsHz(spec: StageSpec, samplingRateHz: number): number[] {
  switch (spec.design) {
    case 'butterworth':
      checkCutoffs(spec.pass, spec.cutoffsHz, samplingRateHz)
      if (spec.meaning === 'design') return [...spec.cutoffsHz]
      return edgesHz(spec.pass, butterworthDesignEdges(spec, samplingRateHz), samplingRateHz)
    case 'windowed-sinc':
      return nominalCutoffsHz(spec, samplingRateHz)
    case 'amplifier':
      return [spec.cutoffHz]
    case 'notch':
      return edgesHz('stop', notchWarpedEdges(spec, 0, samplingRateHz), samplingRateHz)
    case 'moving-average':
      return []
  }
}
