import { appliedStages, type Chain } from '../filter/chain.ts'
import { chainCutoffPoints } from '../filter/cutoff-points.ts'
import { gainAt } from '../filter/stage-response.ts'
import type { Stage } from '../filter/stage.ts'

/** Where the gain of stages together falls below half power at the lower and at the upper end. */
export interface ChainBand {
  /** Half-power point in Hz above which the band begins; null where it begins at 0 Hz. */
  readonly lowHz: number | null
  /** Half-power point in Hz at which the band ends; null where it reaches half the sampling rate. */
  readonly highHz: number | null
  /** The lowest half-amplitude point in Hz (gain 1/2), where the gain at 0 Hz lies below it; else null. */
  readonly lowHalfAmplitudeHz: number | null
  /** Whether the gain reaches half power anywhere. */
  readonly passes: boolean
}

/**
 * The band that stages pass together, between its outermost half-power points (gain 1/√2), in the data or applied. Dips inside it, as of
 * a notch, do not end it.
 */
export function chainBand(stages: readonly Stage[], samplingRateHz: number): ChainBand {
  const here = stages.map((stage) => ({ ...stage, spec: { ...stage.spec, inData: false } }))
  const chain: Chain = { samplingRateHz, stages: here }
  const applied = appliedStages(chain)
  if (applied.length === 0) return { lowHz: null, highHz: null, lowHalfAmplitudeHz: null, passes: true }
  const { halfPowerHz: points, halfAmplitudeHz } = chainCutoffPoints(chain)
  const lowHalfAmplitudeHz = gainAt(applied, 0) < 0.5 ? (halfAmplitudeHz[0] ?? null) : null
  const passesAt = (hz: number) => gainAt(applied, hz) >= Math.SQRT1_2
  const fromZero = passesAt(0)
  const toHalf = passesAt(samplingRateHz / 2)
  if (points.length === 0) return { lowHz: null, highHz: null, lowHalfAmplitudeHz, passes: fromZero }
  return {
    lowHz: fromZero ? null : points[0],
    highHz: toHalf ? null : points[points.length - 1],
    lowHalfAmplitudeHz,
    passes: true,
  }
}

/** Slope of one pole in dB per octave: 20·log10(2). */
export const DB_PER_POLE = 20 * Math.log10(2)

/** Poles by which the recursive stages given bound the band at one end, each counted as often as it runs: 6.02 dB per octave each. */
export function polesAtEnd(stages: readonly Stage[], end: 'low' | 'high'): number {
  let poles = 0
  for (const stage of stages) {
    const { spec, passes } = stage
    if ((spec.design === 'butterworth' || spec.design === 'amplifier') && bounds(stage, end))
      poles += spec.order * passes
  }
  return poles
}

/** Whether a stage ends the band at its lower or upper end. */
export function bounds({ spec }: Stage, end: 'low' | 'high'): boolean {
  if (spec.design === 'notch') return false
  if (spec.design === 'moving-average') return end === 'high'
  return spec.pass === 'band' || spec.pass === (end === 'low' ? 'high' : 'low')
}
