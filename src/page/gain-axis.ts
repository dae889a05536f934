/** The vertical axis of the frequency figure, and gains, spectra and noise as heights on it. */
import type { FrequencyFigure } from '../state/evaluation.ts'

export type GainUnit = 'percent' | 'dB'

/** Below this gain of the whole chain phase and delay are not drawn: nothing that they describe gets through. */
export const DRAWN_GAIN = 0.01
/** No gain is drawn below this. */
const LOWEST_DB = -120

export function gainToDb(gain: number): number {
  return 20 * Math.log10(gain)
}

/** Vertical axis of the gains: domain with room for labels above full gain, and its ticks. */
export interface GainAxis {
  domain: [number, number]
  ticks: number[]
  /** Where the halves stand, in the axis' unit. */
  halfAmplitude: number
  halfPower: number
  full: number
}

/** @param pinned  gains of pinned chains, which are drawn as well. */
export function gainAxis(frequency: FrequencyFigure, unit: GainUnit, pinned: readonly Float64Array[] = []): GainAxis {
  const drawn = [frequency.gain, ...frequency.stages.map((stage) => stage.gain), ...pinned]
  const highest = Math.max(1, ...drawn.map(largest))
  if (unit === 'percent') {
    // one row of labels has its place above the highest curve
    const ticks = highest > 1.6 ? [0, 50, 100, 100 * Math.floor(highest)] : [0, 50, 100 * Math.SQRT1_2, 100]
    return {
      domain: [0, 100 * highest * 1.2],
      ticks: [...new Set(ticks)],
      halfAmplitude: 50,
      halfPower: 100 * Math.SQRT1_2,
      full: 100,
    }
  }
  const floor = floorDb(frequency.gain)
  const step = floor < -80 ? 40 : 20
  const ticks: number[] = []
  for (let db = 0; db > floor - 1; db -= step) ticks.push(db)
  return {
    domain: [floor, gainToDb(highest) - floor * 0.2],
    ticks,
    halfAmplitude: gainToDb(0.5),
    halfPower: gainToDb(Math.SQRT1_2),
    full: 0,
  }
}

/**
 * Lower end of an axis in dB: −60, or lower where the stop band has ripples, so that the highest of them can be seen; gains that only
 * fall need no more room.
 */
export function floorDb(gain: ArrayLike<number>): number {
  let ripple = 0
  for (let i = 1; i + 1 < gain.length; i++) {
    if (gain[i] < DRAWN_GAIN && gain[i] > gain[i - 1] && gain[i] >= gain[i + 1]) ripple = Math.max(ripple, gain[i])
  }
  // ripples of rounding errors are none
  const wanted = ripple > 1e-7 ? 20 * Math.floor((gainToDb(ripple) - 5) / 20) : -60
  return Math.max(LOWEST_DB, Math.min(-60, wanted))
}

/** Gains in the axis' unit; a gain of nothing lies below the axis, so that its line leaves the figure. */
export function gainsIn(unit: GainUnit, gain: ArrayLike<number>, axis: GainAxis): Float64Array {
  const out = new Float64Array(gain.length)
  const lowest = axis.domain[0] - 20
  for (let i = 0; i < out.length; i++)
    out[i] = unit === 'percent' ? 100 * gain[i] : Math.max(lowest, gainToDb(Math.max(gain[i], 1e-12)))
  return out
}

/**
 * The waveform's spectrum on a scale of its own on the same axis: its largest value stands at full gain.
 *
 * @param largestValue  what counts as the largest; two spectra that share it share the scale.
 */
export function spectrumIn(
  unit: GainUnit,
  spectrum: ArrayLike<number>,
  largestValue: number,
  axis: GainAxis,
): Float64Array {
  const shares = Float64Array.from(spectrum, (value) => (largestValue > 0 ? value / largestValue : 0))
  return gainsIn(unit, shares, axis)
}

/** Height of the noise's largest density, as a share of the height of full gain: below most of what else is drawn. */
const NOISE_TOP = 0.36
/** What the noise's own logarithmic scale spans. */
const NOISE_DB = 60

/**
 * The noise on a logarithmic scale of its own: it falls over so many decades that on a linear one only its slowest part would be seen.
 */
export function noiseIn(noise: ArrayLike<number>, axis: GainAxis): Float64Array {
  const most = largest(noise)
  const [bottom] = axis.domain
  return Float64Array.from(noise, (value) => {
    const share = most > 0 && value > 0 ? 1 + gainToDb(value / most) / NOISE_DB : 0
    return bottom + (axis.full - bottom) * NOISE_TOP * Math.max(0, share)
  })
}

/** The largest finite value, 0 where there is none above. */
export function largest(values: ArrayLike<number>): number {
  let most = 0
  for (let i = 0; i < values.length; i++) if (values[i] > most && Number.isFinite(values[i])) most = values[i]
  return most
}
