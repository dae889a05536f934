/** The curves of the late-only account on the epoch's samples. */
import type { Dash, Tone, Weight } from '../../../plot/index.ts'
import type { LateOnlyResult } from '../../../state/late-only-steps.ts'

export interface FitCurve {
  readonly name: string
  readonly values: Float64Array
  readonly tone: Tone
  readonly dash: Dash
  readonly weight: Weight
}

export function lateOnlyCurves({ robust, fitted, timesMs }: LateOnlyResult): FitCurve[] {
  const { fit } = robust
  const { filtered, lateOnlyConstant, lateWaveform } = fit
  const step = (timesMs[timesMs.length - 1] - timesMs[0]) / (timesMs.length - 1)
  // it begins at its onset and may go on after the epoch
  const from = Math.round((lateWaveform.fromMs - timesMs[0]) / step)
  const late = Float64Array.from(timesMs, (_, i) => lateWaveform.values[i - from] ?? 0)
  const made = filtered.map((value) => value + lateOnlyConstant)
  return [
    { name: 'late activity, unfiltered', values: late, tone: 'before', dash: 'solid', weight: 'thin' },
    {
      name: 'what is left',
      values: fitted.map((y, i) => y - made[i]),
      tone: 'taken-out',
      dash: 'dashed',
      weight: 'thin',
    },
    { name: 'the filtered waveform', values: fitted, tone: 'ink', dash: 'solid', weight: 'hair' },
    { name: 'what the filter makes of it', values: made, tone: 'after', dash: 'solid', weight: 'thick' },
  ]
}
