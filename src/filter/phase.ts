import { stageGroupDelaySeconds } from './group-delay.ts'
import { isSymmetric, symmetricAmplitude, trigonometricSums } from './kernel-response.ts'
import { sectionsPhaseRad } from './section-response.ts'
import type { Stage } from './stage.ts'

/**
 * Phase of one stage as applied, in rad, unwrapped; a lag is negative. Where the gain passes through zero the sign turns,
 * and the phase steps by π: a real step, which is not smoothed away.
 *
 * @param frequenciesHz  ascending, from 0 to half the sampling rate. Sections and symmetric kernels are unwrapped in
 *                       closed form; a minimum-phase kernel from each frequency to the next, led by its group delay.
 */
export function stagePhaseRad(stage: Stage, frequenciesHz: Float64Array): Float64Array {
  const phase = new Float64Array(frequenciesHz.length)
  const { samplingRateHz } = stage
  if (stage.analogue) {
    if (stage.passes === 2) return phase
    for (let i = 0; i < phase.length; i++) {
      phase[i] = sectionsPhaseRad(stage.analogue, frequenciesHz[i], samplingRateHz)
    }
    return phase
  }
  const taps = stage.taps
  if (!taps) return phase
  const perHz = (2 * Math.PI) / samplingRateHz
  if (isSymmetric(taps)) {
    const amplitude = symmetricAmplitude(taps, frequenciesHz, samplingRateHz)
    const delay = (taps.length - 1) / 2 - stage.leadSamples
    for (let i = 0; i < phase.length; i++) {
      phase[i] = (amplitude[i] < 0 ? Math.PI : 0) - (delay === 0 ? 0 : delay * perHz * frequenciesHz[i])
    }
    return phase
  }
  const delays = stageGroupDelaySeconds(stage, frequenciesHz)
  const { cosine, sine } = trigonometricSums(taps, frequenciesHz, samplingRateHz)
  for (let i = 0; i < phase.length; i++) {
    const wrapped = Math.atan2(-sine[i], cosine[i]) + stage.leadSamples * perHz * frequenciesHz[i]
    if (i === 0) {
      phase[0] = wrapped
      continue
    }
    const delay = (delays[i] + delays[i - 1]) / 2
    const step = 2 * Math.PI * (frequenciesHz[i] - frequenciesHz[i - 1])
    const expected = phase[i - 1] - (Number.isFinite(delay) ? delay * step : 0)
    phase[i] = wrapped + 2 * Math.PI * Math.round((expected - wrapped) / (2 * Math.PI))
  }
  return phase
}

/** Phase of several stages one after another, in rad: the sum of theirs. */
export function stagesPhaseRad(stages: readonly Stage[], frequenciesHz: Float64Array): Float64Array {
  const sum = new Float64Array(frequenciesHz.length)
  for (const stage of stages) {
    const phase = stagePhaseRad(stage, frequenciesHz)
    for (let i = 0; i < sum.length; i++) sum[i] += phase[i]
  }
  return sum
}
