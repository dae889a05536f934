import type { ToneComponent } from '../erp/component.ts'
import { waveformAt } from '../erp/waveform.ts'
import { absoluteSum, lastBefore } from '../filter/absolute-sum.ts'
import { adjointContinuous } from '../filter/stand-alone.ts'
import type { Stage } from '../filter/stage.ts'
import { stagesResponse } from '../filter/stage-response.ts'
import { MAX_SAMPLES_OUTSIDE } from './traced-waveform.ts'

/** What the tail of a window after the range may leave out, of its absolute sum. */
const LEFT_OUT = 1e-12

/** Steady tones after stages that run as continuous, exactly: amplitude times gain, phase plus phase. */
export function filteredTones(
  stages: readonly Stage[],
  tones: readonly ToneComponent[],
  timesMs: Float64Array,
): Float64Array {
  const { re, im } = stagesResponse(
    stages,
    Float64Array.from(tones, (tone) => tone.frequencyHz),
  )
  return waveformAt(
    tones.map((tone, i) => ({
      ...tone,
      amplitudeUv: tone.amplitudeUv * Math.hypot(re[i], im[i]),
      phaseRad: tone.phaseRad + Math.atan2(im[i], re[i]),
    })),
    timesMs,
  )
}

/** Σ w[n]·y[n] of steady tones y after the stages. */
export function toneContribution(
  stages: readonly Stage[],
  w: Float64Array,
  tones: readonly ToneComponent[],
  timesMs: Float64Array,
): number {
  if (tones.length === 0) return 0
  const y = filteredTones(stages, tones, timesMs)
  let sum = 0
  for (let i = 0; i < w.length; i++) sum += w[i] * y[i]
  return sum
}

/**
 * Contribution of steady tones before and after a range of samples, Σ g[m]·tone[m]. All of it is known exactly from the response; what lies after
 * the range is summed along the window's tail there, and what lies before it is the rest.
 *
 * @param inside  Σ g[m]·tone[m] over the range, samples from … to − 1 relative to w[0].
 */
export function toneTails(
  stages: readonly Stage[],
  w: Float64Array,
  tones: readonly ToneComponent[],
  timesMs: Float64Array,
  samplingRateHz: number,
  to: number,
  inside: number,
): { before: number; after: number } {
  if (tones.length === 0 || stages.length === 0) return { before: 0, after: 0 }
  const reversed = w.slice().reverse()
  const sum = absoluteSum(stages, reversed, true)
  if (sum.total === 0) return { before: 0, after: 0 }
  const end = Math.min(to + MAX_SAMPLES_OUTSIDE, w.length - lastBefore(sum, LEFT_OUT * sum.total))
  let after = 0
  if (end > to) {
    const g = adjointContinuous(stages, w, to, end)
    const times = Float64Array.from(g, (_, i) => timesMs[0] + ((to + i) * 1000) / samplingRateHz)
    const x = waveformAt(tones, times)
    for (let i = 0; i < g.length; i++) after += g[i] * x[i]
  }
  return { before: toneContribution(stages, w, tones, timesMs) - inside - after, after }
}
