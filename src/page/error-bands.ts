/** One standard error on either side of a recorded average, before and after the chain. */
import type { Tone } from '../plot/index.ts'
import type { Evaluation } from '../state/evaluation.ts'

export interface ErrorBand {
  tone: Tone
  lower: Float64Array
  upper: Float64Array
}

/** Null for a waveform without single trials. */
export function errorBands({ curves, chosen, standardErrors }: Evaluation): ErrorBand[] | null {
  if (!standardErrors) return null
  const around = (tone: Tone, curve: Float64Array, errors: Float64Array): ErrorBand => ({
    tone,
    lower: curve.map((value, i) => value - errors[i]),
    upper: curve.map((value, i) => value + errors[i]),
  })
  const { before, after } = curves[chosen]
  const bands = [around('before', before, standardErrors.before)]
  if (standardErrors.after) bands.push(around('after', after, standardErrors.after))
  return bands
}
