import { nextPowerOfTwo, realTransform } from '../filter/fourier.ts'
import { movingAverageSamples } from '../filter/moving-average.ts'
import type { Stage } from '../filter/stage.ts'
import { designCutoffsHz } from '../filter/cutoff-meaning.ts'
import { gainAt } from '../filter/stage-response.ts'

/** How far a windowed sinc departs from 1 in its pass band and from 0 in its stop band, outside its transitions. */
export interface BandErrors {
  /** Largest departure of the gain from 1; null where the transitions leave no pass band. */
  readonly passDeviation: number | null
  /** Largest gain; null where the transitions leave no stop band. */
  readonly stopGain: number | null
}

/** Points of the response for each tap: 8 a side lobe. */
const POINTS_PER_TAP = 16

/**
 * Largest gain of a moving average above its first null, measured on the kernel; null where half the sampling rate is reached before.
 */
export function sideLobeGain(stage: Stage): number | null {
  const { spec, taps, samplingRateHz } = stage
  if (spec.design !== 'moving-average' || taps === null) return null
  const samples = movingAverageSamples(spec.durationMs, samplingRateHz)
  const size = Math.max(4096, nextPowerOfTwo(POINTS_PER_TAP * taps.length))
  const { re, im } = realTransform(taps, size)
  let largest: number | null = null
  for (let k = Math.floor(size / samples) + 1; k <= size / 2; k++)
    largest = Math.max(largest ?? 0, Math.sqrt(re[k] * re[k] + im[k] * im[k]))
  return largest
}

/** Measured on the designed kernel; a transition is the stated width about its nominal centre. Null for any other design. */
export function bandErrors(stage: Stage): BandErrors | null {
  const { spec, taps, samplingRateHz } = stage
  if (spec.design !== 'windowed-sinc' || taps === null) return null
  const centres = designCutoffsHz(spec, samplingRateHz)
  const size = Math.max(4096, nextPowerOfTwo(POINTS_PER_TAP * taps.length))
  const { re, im } = realTransform(taps, size)
  let passDeviation: number | null = null
  let stopGain: number | null = null
  const look = (frequency: number, gain: number, between: boolean) => {
    const passes =
      centres.length === 2 ? between === (spec.pass === 'band') : frequency < centres[0] === (spec.pass === 'low')
    if (passes) passDeviation = Math.max(passDeviation ?? 0, Math.abs(gain - 1))
    else stopGain = Math.max(stopGain ?? 0, gain)
  }
  const isBetween = (frequency: number) => centres.length === 2 && frequency > centres[0] && frequency < centres[1]
  const half = spec.transitionHz / 2
  const isInside = (frequency: number) => centres.some((centre) => Math.abs(frequency - centre) < half * (1 - 1e-9))
  for (let k = 0; k <= size / 2; k++) {
    const frequency = (k * samplingRateHz) / size
    if (!isInside(frequency)) look(frequency, Math.sqrt(re[k] * re[k] + im[k] * im[k]), isBetween(frequency))
  }
  // the gain is steep where a transition ends, which seldom lies on the grid
  for (const end of centres.flatMap((centre) => [centre - half, centre + half])) {
    if (end >= 0 && end <= samplingRateHz / 2 && !isInside(end)) look(end, gainAt([stage], end), isBetween(end))
  }
  return { passDeviation, stopGain }
}
