import type { Complex } from './fourier.ts'
import { isSymmetric, symmetricAmplitude, trigonometricSums } from './kernel-response.ts'
import { multiplyBySections } from './section-response.ts'
import type { Stage } from './stage.ts'

/**
 * Frequency response of one stage as applied: |H|² when it runs both ways, a compensated delay taken out.
 *
 * @param frequenciesHz  any finite frequencies; the response repeats with the sampling rate.
 * @returns  real and imaginary parts, one value a frequency.
 * @throws RangeError for a frequency that is not finite.
 */
export function stageResponse(stage: Stage, frequenciesHz: Float64Array): Complex {
  return stagesResponse([stage], frequenciesHz)
}

/** Response of several stages one after another, as applied; 1 everywhere for none. */
export function stagesResponse(stages: readonly Stage[], frequenciesHz: Float64Array): Complex {
  for (let i = 0; i < frequenciesHz.length; i++) {
    if (!Number.isFinite(frequenciesHz[i])) {
      throw new RangeError(`frequenciesHz[${i}] must be finite, was ${frequenciesHz[i]}`)
    }
  }
  const re = new Float64Array(frequenciesHz.length).fill(1)
  const im = new Float64Array(frequenciesHz.length)
  for (const stage of stages) {
    if (stage.analogue) multiplyBySections(stage.analogue, stage.passes, frequenciesHz, stage.samplingRateHz, re, im)
    else if (stage.taps) multiplyByKernel(stage, stage.taps, frequenciesHz, re, im)
  }
  return { re, im }
}

function multiplyByKernel(
  stage: Stage,
  taps: Float64Array,
  frequenciesHz: Float64Array,
  re: Float64Array,
  im: Float64Array,
): void {
  const perHz = (2 * Math.PI) / stage.samplingRateHz
  if (isSymmetric(taps)) {
    const amplitude = symmetricAmplitude(taps, frequenciesHz, stage.samplingRateHz)
    const delay = (taps.length - 1) / 2 - stage.leadSamples
    for (let i = 0; i < re.length; i++) {
      if (delay === 0) {
        re[i] *= amplitude[i]
        im[i] *= amplitude[i]
      } else {
        const angle = -delay * perHz * frequenciesHz[i]
        multiply(re, im, i, amplitude[i] * Math.cos(angle), amplitude[i] * Math.sin(angle))
      }
    }
    return
  }
  const { cosine, sine } = trigonometricSums(taps, frequenciesHz, stage.samplingRateHz)
  for (let i = 0; i < re.length; i++) {
    const angle = stage.leadSamples * perHz * frequenciesHz[i]
    const turnRe = Math.cos(angle)
    const turnIm = Math.sin(angle)
    multiply(re, im, i, cosine[i] * turnRe + sine[i] * turnIm, cosine[i] * turnIm - sine[i] * turnRe)
  }
}

function multiply(re: Float64Array, im: Float64Array, i: number, byRe: number, byIm: number): void {
  const product = re[i] * byRe - im[i] * byIm
  im[i] = re[i] * byIm + im[i] * byRe
  re[i] = product
}

/** Gain (magnitude) of several stages as applied at one frequency. */
export function gainAt(stages: readonly Stage[], frequencyHz: number): number {
  const { re, im } = stagesResponse(stages, Float64Array.of(frequencyHz))
  return Math.sqrt(re[0] * re[0] + im[0] * im[0])
}
