import { nextPowerOfTwo, realTransform } from '../filter/fourier.ts'

/** Zero-padded to at least this many times its length, a transform is smooth between its points. */
const PADDING = 8
const MIN_POINTS = 8192

/** |X| of a stretch that is zero outside, µV·s, at k·stepHz from 0 to half the sampling rate. */
export interface AmplitudeSpectrum {
  readonly stepHz: number
  readonly amplitudes: Float64Array
}

/**
 * Amplitude spectrum of a stretch that is zero outside: |Σ x[n]·e^(−j2πfn/fs)|/fs, by a zero-padded transform.
 *
 * @param values µV, one per sample.
 */
export function amplitudeSpectrum(values: Float64Array, samplingRateHz: number): AmplitudeSpectrum {
  const points = Math.max(MIN_POINTS, nextPowerOfTwo(values.length * PADDING))
  const { re, im } = realTransform(values, points)
  const amplitudes = new Float64Array(points / 2 + 1)
  for (let k = 0; k < amplitudes.length; k++) amplitudes[k] = Math.sqrt(re[k] * re[k] + im[k] * im[k]) / samplingRateHz
  return { stepHz: samplingRateHz / points, amplitudes }
}

/**
 * The spectrum at any frequencies, linear between its points: a curve to look at (within 1 % of its largest value), not a measurement.
 *
 * @param frequenciesHz 0 to half the sampling rate.
 */
export function amplitudesAt(spectrum: AmplitudeSpectrum, frequenciesHz: Float64Array): Float64Array {
  const { stepHz, amplitudes } = spectrum
  const last = amplitudes.length - 1
  return frequenciesHz.map((hz) => {
    const place = Math.min(last, Math.max(0, hz / stepHz))
    const k = Math.min(last - 1, Math.floor(place))
    return amplitudes[k] + (place - k) * (amplitudes[k + 1] - amplitudes[k])
  })
}
