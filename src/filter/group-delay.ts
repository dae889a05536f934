import { isPalindrome, trigonometricSums } from './kernel-response.ts'
import { sectionsGroupDelaySeconds } from './section-response.ts'
import type { Stage } from './stage.ts'

/** A gain below this part of Σ|taps| is zero to rounding: the group delay is undefined there. */
const NO_GAIN = 1e-13

/**
 * Group delay −dφ/dω of one stage as applied, in s: 0 for a stage that runs both ways or whose delay is compensated,
 * constant for a symmetric kernel, else the closed form of the sections or the kernel's weighted transform.
 *
 * @returns  one value a frequency; NaN where a kernel lets nothing through, since the delay is undefined there.
 * @see Oppenheim & Schafer, Discrete-Time Signal Processing, ch. 5.
 */
export function stageGroupDelaySeconds(stage: Stage, frequenciesHz: Float64Array): Float64Array {
  const delays = new Float64Array(frequenciesHz.length)
  const { samplingRateHz } = stage
  if (stage.analogue) {
    if (stage.passes === 2) return delays
    for (let i = 0; i < delays.length; i++) {
      delays[i] = sectionsGroupDelaySeconds(stage.analogue, frequenciesHz[i], samplingRateHz)
    }
    return delays
  }
  const taps = stage.taps
  if (!taps) return delays
  if (isPalindrome(taps)) return delays.fill(((taps.length - 1) / 2 - stage.leadSamples) / samplingRateHz)
  let absolute = 0
  for (const tap of taps) absolute += Math.abs(tap)
  const plain = trigonometricSums(taps, frequenciesHz, samplingRateHz)
  const weighted = trigonometricSums(
    taps.map((tap, k) => k * tap),
    frequenciesHz,
    samplingRateHz,
  )
  for (let i = 0; i < delays.length; i++) {
    const power = plain.cosine[i] ** 2 + plain.sine[i] ** 2
    const dot = weighted.cosine[i] * plain.cosine[i] + weighted.sine[i] * plain.sine[i]
    delays[i] = power > (NO_GAIN * absolute) ** 2 ? (dot / power - stage.leadSamples) / samplingRateHz : NaN
  }
  return delays
}

/** Group delay of several stages one after another, in s: the sum of theirs. */
export function stagesGroupDelaySeconds(stages: readonly Stage[], frequenciesHz: Float64Array): Float64Array {
  const sum = new Float64Array(frequenciesHz.length)
  for (const stage of stages) {
    const delays = stageGroupDelaySeconds(stage, frequenciesHz)
    for (let i = 0; i < sum.length; i++) sum[i] += delays[i]
  }
  return sum
}

/** Group delay of several stages one after another, in samples. */
export function stagesGroupDelaySamples(stages: readonly Stage[], frequenciesHz: Float64Array): Float64Array {
  const delays = stagesGroupDelaySeconds(stages, frequenciesHz)
  if (stages.length > 0) for (let i = 0; i < delays.length; i++) delays[i] *= stages[0].samplingRateHz
  return delays
}
