/** What the frequency figure says in words and numbers. */
import type { Scale } from '../plot/scale.ts'
import type { Evaluation, FrequencyFigure } from '../state/evaluation.ts'
import type { View } from '../state/view.ts'
import { brief, fixed, list } from '../words/number.ts'
import { valueAt } from './curve-course.ts'
import { delayPieces, phasePieces } from './frequency-pieces.ts'
import { DRAWN_GAIN, gainToDb, largest } from './gain-axis.ts'

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
export function axisTitle({ domain, range }: Scale): string {
  const decadePx = (range[1] - range[0]) / Math.log10(domain[1] / domain[0])
  return decadePx > 140 ? 'Frequency, Hz' : 'Hz'
}

/** "1.25 Hz: 71 %, −3.0 dB" */
export function readingAt(frequency: FrequencyFigure, shows: View['frequencyShows'], hz: number): string {
  const gain = valueAt(frequency.hz, frequency.gain, hz)
  if (shows === 'gain') return `${hzText(hz)}: ${gainText(gain)}`
  if (gain < DRAWN_GAIN) return `${hzText(hz)}: gain below 1 %`
  if (shows === 'phase') {
    const { hz: at, values } = phasePieces(frequency)
    return `${hzText(hz)}: ${fixed(valueAt(at, values, hz), 0)}°`
  }
  return `${hzText(hz)}: ${fixed(valueAt(frequency.hz, frequency.groupDelayMs, hz), 1)} ms`
}

/** The figure in words, with its numbers. */
export function frequencyInWords(evaluation: Evaluation, shows: View['frequencyShows']): string {
  const { frequency, table, pins } = evaluation
  const ends = `${hzText(frequency.hz[0])} to ${hzText(frequency.hz[frequency.hz.length - 1])}`
  if (shows !== 'gain') {
    const { values } = (shows === 'phase' ? phasePieces : delayPieces)(frequency)
    const drawn = values.filter(Number.isFinite)
    const what = shows === 'phase' ? 'Phase in degrees' : 'Group delay in milliseconds'
    if (drawn.length === 0) return `${what} of the whole chain: its gain exceeds 1 % nowhere from ${ends}.`
    const unit = shows === 'phase' ? '°' : ' ms'
    const [low, high] = [Math.min(...drawn), Math.max(...drawn)].map(
      (value) => fixed(value, shows === 'phase' ? 0 : 1) + unit,
    )
    const range = low === high ? `${low} throughout` : `between ${low} and ${high}`
    return `${what} of the whole chain from ${ends}, where its gain exceeds 1 %: ${range}.`
  }
  const points = (hz: number[]) => (hz.length > 0 ? `at ${list(hz.map(hzText))}` : 'nowhere on the axis')
  const { halfAmplitudeHz, halfPowerHz, stages } = frequency
  const names = stages.map(({ index, inData }) => {
    const name = table.find((row) => row.index === index)?.name ?? `stage ${index + 1}`
    return inData ? `${name} (in the data)` : name
  })
  return [
    `Gain over frequency from ${ends}.`,
    `The whole chain passes half the amplitude ${points(halfAmplitudeHz)} and half the power ${points(halfPowerHz)}`,
    `and at most ${fixed(100 * largest(frequency.gain), 0)} % of the amplitude.`,
    names.length > 0 ? `Stages: ${list(names)}.` : 'There is no stage.',
    ...pins.flatMap((pin) => ('reason' in pin ? [] : [`Pinned ${pin.name}: ${halvesOf(frequency.hz, pin.gain)}.`])),
    'Behind it the amplitude spectra of the waveform before and after, and of the noise, to their own scales.',
  ].join(' ')
}

/** Where a gain runs through a half, as read off its curve: "half the amplitude at 0.10 Hz and 30.0 Hz". */
function halvesOf(hz: Float64Array, gain: Float64Array): string {
  const found: number[] = []
  for (let i = 1; i < hz.length; i++) {
    const [a, b] = [gain[i - 1] - 0.5, gain[i] - 0.5]
    if (a === b || a * b > 0 || b === 0) continue
    found.push(hz[i - 1] * (hz[i] / hz[i - 1]) ** (a / (a - b)))
  }
  if (found.length === 0) return 'half the amplitude nowhere on the axis'
  return found.length > 4
    ? `half the amplitude at ${found.length} points`
    : `half the amplitude at ${list(found.map(hzText))}`
}
