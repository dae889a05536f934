/** The numbers behind the frequency figure: its axes, gains as heights, courses of curves by pixel column, phase without false jumps. */
import type { FrequencyFigure } from '../state/evaluation.ts'
import { brief, fixed } from '../words/number.ts'

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

export function gainAxis(frequency: FrequencyFigure, unit: GainUnit): GainAxis {
  const highest = Math.max(1, largest(frequency.gain), ...frequency.stages.map((stage) => largest(stage.gain)))
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

/**
 * Value of a curve at a frequency, linear over log frequency; the end values outside.
 *
 * @param hz  ascending, above 0.
 */
export function valueAt(hz: ArrayLike<number>, values: ArrayLike<number>, atHz: number): number {
  const last = hz.length - 1
  if (!(atHz > hz[0])) return values[0]
  if (atHz >= hz[last]) return values[last]
  let low = 0
  let high = last
  while (high - low > 1) {
    const middle = (low + high) >> 1
    if (hz[middle] <= atHz) low = middle
    else high = middle
  }
  const share = Math.log(atHz / hz[low]) / Math.log(hz[high] / hz[low])
  return values[low] + (values[high] - values[low]) * share
}

/** Heights of a curve by pixel column, from left on; NaN outside the curve. */
export function courseOf(
  hz: ArrayLike<number>,
  values: ArrayLike<number>,
  x: { fromPixel: (pixel: number) => number },
  y: { toPixel: (value: number) => number },
  left: number,
  columns: number,
): Float64Array {
  const heights = new Float64Array(columns + 1).fill(Number.NaN)
  let low = 0
  for (let column = 0; column <= columns; column++) {
    const at = x.fromPixel(left + column)
    if (at < hz[0] * (1 - 1e-9) || at > hz[hz.length - 1] * (1 + 1e-9)) continue
    while (low + 2 < hz.length && hz[low + 1] < at) low++
    const share = Math.log(at / hz[low]) / Math.log(hz[low + 1] / hz[low])
    heights[column] = y.toPixel(values[low] + (values[low + 1] - values[low]) * Math.max(0, Math.min(1, share)))
  }
  return heights
}

/** A curve in pieces: NaN between two of them, where nothing is drawn. */
export interface Pieces {
  hz: number[]
  values: number[]
}

/** Phase in degrees between −180 and 180, broken where it wraps and where next to nothing gets through. */
export function phasePieces({ hz, phaseRad, gain }: Pick<FrequencyFigure, 'hz' | 'phaseRad' | 'gain'>): Pieces {
  const out: Pieces = { hz: [], values: [] }
  let before = Number.NaN
  for (let i = 0; i < hz.length; i++) {
    const degrees = gain[i] >= DRAWN_GAIN ? wrapped((phaseRad[i] * 180) / Math.PI) : Number.NaN
    if (Math.abs(degrees - before) > 180) {
      // the line runs out at one edge and comes in at the other
      const turn = degrees > before ? 360 : -360
      const edge = degrees > before ? -180 : 180
      const share = (edge - before) / (degrees - turn - before || 1)
      const at = hz[i - 1] * (hz[i] / hz[i - 1]) ** Math.max(0, Math.min(1, share))
      out.hz.push(at, at, at)
      out.values.push(edge, Number.NaN, -edge)
    }
    out.hz.push(hz[i])
    out.values.push(degrees)
    before = degrees
  }
  return out
}

/** An angle in (−180, 180]; a half turn with a rounding error is 180. */
function wrapped(degrees: number): number {
  const turned = degrees - 360 * Math.round(degrees / 360)
  return turned <= -180 + 1e-6 ? turned + 360 : turned
}

/** Group delay where the chain lets something through. */
export function delayPieces({ hz, groupDelayMs, gain }: Pick<FrequencyFigure, 'hz' | 'groupDelayMs' | 'gain'>): Pieces {
  const values = Array.from(groupDelayMs, (delay, i) => (gain[i] >= DRAWN_GAIN ? delay : Number.NaN))
  return { hz: Array.from(hz), values }
}

/** Domain for values of any sign, zero within and a tenth of room at both ends; ±10 where all are zero. */
export function delayDomain(values: readonly number[]): [number, number] {
  let low = 0
  let high = 0
  for (const value of values) {
    if (!Number.isFinite(value)) continue
    low = Math.min(low, value)
    high = Math.max(high, value)
  }
  if (high - low < 1e-6) return [-10, 10]
  const room = (high - low) * 0.12
  return [low - room, high + room]
}

/** A frequency as it is written on a figure: three digits, two below 0.1 Hz, whole hertz from 100 on. */
export function hzText(hz: number): string {
  if (hz >= 99.95) return `${fixed(hz, 0)} Hz`
  if (hz >= 9.995) return `${fixed(hz, 1)} Hz`
  return `${hz >= 0.9995 ? fixed(hz, 2) : brief(hz, hz >= 0.0995 ? 3 : 2)} Hz`
}

/** "71 %, −3.0 dB" */
export function gainText(gain: number): string {
  const percent = `${fixed(100 * gain, gain < 0.0995 ? 1 : 0)} %`
  return gain > 1e-6 ? `${percent}, ${fixed(gainToDb(gain), 1)} dB` : `${percent}, under ${fixed(-120, 0)} dB`
}

/** Title of the frequency axis: the whole of it where it fits between two decades, else the unit alone. */
export function axisTitle(fromHz: number, toHz: number, plotWidth: number): string {
  const decadePx = plotWidth / Math.log10(toHz / fromHz)
  return decadePx > 140 ? 'Frequency, Hz' : 'Hz'
}
