import type { Sections } from './second-order-sections.ts'
import { checkChoice, checkFrequency, checkWhole, specError } from './spec-error.ts'
import type { NotchSpec } from './stage.ts'
import { passesOf, unwarp, type WarpedEdges, warp, warpedRatio } from './warped-axis.ts'

/** Largest number of harmonics that a notch may have beside its own frequency. */
export const MAX_HARMONICS = 100

/** @throws RangeError for a frequency, bandwidth, number of harmonics or direction that cannot be designed. */
export function checkNotch(spec: NotchSpec, samplingRateHz: number): void {
  const half = samplingRateHz / 2
  checkFrequency('frequencyHz', spec.frequencyHz, samplingRateHz)
  checkFrequency('bandwidthHz', spec.bandwidthHz, samplingRateHz)
  checkWhole('harmonics', spec.harmonics, 0, MAX_HARMONICS)
  checkChoice('direction', spec.direction, ['forward', 'both'])
  const highest = spec.frequencyHz * (spec.harmonics + 1)
  if (!(highest < half)) {
    const fit = Math.ceil(half / spec.frequencyHz) - 2
    throw specError(
      'harmonics',
      `harmonics must stay below ${half} (half the sampling rate): at most ${fit} of ${spec.frequencyHz} Hz, ` +
        `was ${spec.harmonics}`,
    )
  }
  if (spec.harmonics > 0 && !(spec.bandwidthHz < spec.frequencyHz)) {
    throw specError(
      'bandwidthHz',
      `bandwidthHz must be smaller than the distance of the harmonics (${spec.frequencyHz}), was ${spec.bandwidthHz}`,
    )
  }
}

/**
 * Single-pass −3 dB width in Hz at which the −3 dB width of the notch as applied is the stated one. Exact, since the
 * bilinear transform keeps a notch's width in Hz a function of its width alone.
 */
export function notchDesignBandwidthHz(spec: NotchSpec, samplingRateHz: number): number {
  const passes = passesOf(spec.direction)
  if (passes === 1) return spec.bandwidthHz
  const ratio = warpedRatio(Math.SQRT1_2, passes, 1)
  return unwarp(warp(spec.bandwidthHz, samplingRateHz) * ratio, samplingRateHz)
}

/** Warped single-pass −3 dB edges of the notch at a harmonic (0 for its own frequency). */
export function notchWarpedEdges(spec: NotchSpec, harmonic: number, samplingRateHz: number): WarpedEdges {
  const centre = warp(spec.frequencyHz * (harmonic + 1), samplingRateHz)
  const width = warp(notchDesignBandwidthHz(spec, samplingRateHz), samplingRateHz) * (1 + centre * centre)
  return { centre, width }
}

/**
 * Second-order notches at a frequency and its harmonics, one row each, as SciPy's `iirnotch(f, f/bandwidth)`.
 *
 * @param spec  a checked notch; `bandwidthHz` is its −3 dB width as applied.
 * @returns  harmonics + 1 rows, each with unit gain at 0 Hz and half the sampling rate.
 * @see Orfanidis, Introduction to Signal Processing, ch. 11 (the source that SciPy names).
 */
export function notchSections(spec: NotchSpec, samplingRateHz: number): Sections {
  const rows = spec.harmonics + 1
  const sections = new Float64Array(6 * rows)
  const analogue = new Float64Array(6 * rows)
  const beta = warp(notchDesignBandwidthHz(spec, samplingRateHz), samplingRateHz)
  const gain = 1 / (1 + beta)
  for (let row = 0; row < rows; row++) {
    const frequencyHz = spec.frequencyHz * (row + 1)
    const cosine = Math.cos((2 * Math.PI * frequencyHz) / samplingRateHz)
    sections.set([gain, -2 * gain * cosine, gain, 1, -2 * gain * cosine, 2 * gain - 1], 6 * row)
    const square = warp(frequencyHz, samplingRateHz) ** 2
    analogue.set([1, 0, square, 1, beta * (1 + square), square], 6 * row)
  }
  return { sections, analogue }
}
