/** Splits a column's header into a name and a unit: 'Cz (µV)', 'time_ms', 'Time [ms]', 'time/s', 'uV'. */

import type { AmplitudeUnit, TimeUnit } from './table.ts'

export interface HeaderName {
  /** Header as printed, trimmed; 'column 3' where it is empty. */
  raw: string
  /** Without the unit; empty when the header is a unit alone. */
  name: string
  time?: TimeUnit
  amplitude?: AmplitudeUnit
  /** The unit is one letter behind '_', '.', '-' or a space, so that it may be part of a name ('EOG_V'). */
  weak: boolean
  /** The unit's first letter could not be decoded (a file that is not UTF-8). */
  damaged: boolean
}

/** Milliseconds per unit. */
export const msPer: Record<TimeUnit, number> = { s: 1000, ms: 1, µs: 1e-3 }
/** Microvolts per unit. */
export const uvPer: Record<AmplitudeUnit, number> = { V: 1e6, mV: 1e3, µV: 1, nV: 1e-3 }

const timeUnits: Record<string, TimeUnit> = {
  s: 's',
  sec: 's',
  secs: 's',
  second: 's',
  seconds: 's',
  ms: 'ms',
  msec: 'ms',
  msecs: 'ms',
  millis: 'ms',
  millisecond: 'ms',
  milliseconds: 'ms',
  us: 'µs',
  usec: 'µs',
  μs: 'µs',
  microsecond: 'µs',
  microseconds: 'µs',
}
// 'ÂµV' is µV in UTF-8 that was once read as Latin-1; '\ufffdV' is µV in Latin-1 that was read as UTF-8.
const amplitudeUnits: Record<string, AmplitudeUnit> = {
  v: 'V',
  volt: 'V',
  volts: 'V',
  mv: 'mV',
  millivolt: 'mV',
  millivolts: 'mV',
  uv: 'µV',
  μv: 'µV',
  âμv: 'µV',
  '\ufffdv': 'µV',
  '\ufffd\ufffdv': 'µV',
  microvolt: 'µV',
  microvolts: 'µV',
  nv: 'nV',
  nanovolt: 'nV',
  nanovolts: 'nV',
}

/** The unit that a word names, if it names one. */
export function unitOf(word: string): Pick<HeaderName, 'time' | 'amplitude' | 'damaged'> | undefined {
  // The micro sign and the Greek letter are two characters that look alike.
  const key = word.trim().replaceAll('µ', 'μ').toLowerCase()
  if (Object.hasOwn(timeUnits, key)) return { time: timeUnits[key], damaged: false }
  if (Object.hasOwn(amplitudeUnits, key)) return { amplitude: amplitudeUnits[key], damaged: key.includes('\ufffd') }
  return undefined
}

export function headerName(field: string, index: number): HeaderName {
  const text = field.trim().slice(0, 500)
  if (text === '') return { raw: `column ${index + 1}`, name: '', weak: false, damaged: false }
  const alone = unitOf(text)
  if (alone) return { raw: text, name: '', weak: text.length === 1, ...alone }
  const close = { '(': ')', '[': ']', '{': '}', '<': '>' }[text.match(/[([{<](?=[^([{<]*$)/)?.[0] ?? '']
  if (close && text.endsWith(close)) {
    const open = Math.max(text.lastIndexOf('('), text.lastIndexOf('['), text.lastIndexOf('{'), text.lastIndexOf('<'))
    const unit = unitOf(text.slice(open + 1, -1).replace(/^in /i, ''))
    if (unit) return { raw: text, name: text.slice(0, open).replace(/[\s_]+$/, ''), weak: false, ...unit }
  }
  const cut = Math.max(...['/', ',', '_', ' ', '.', '-', ':'].map((mark) => text.lastIndexOf(mark)))
  if (cut > 0) {
    const unit = unitOf(text.slice(cut + 1))
    const strong = text[cut] === '/' || text[cut] === ','
    if (unit) {
      const name = text.slice(0, cut).replace(/[\s_,/]+(in)?$/, '')
      return { raw: text, name, weak: !strong && text.length - cut === 2, ...unit }
    }
  }
  return { raw: text, name: text, weak: false, damaged: false }
}
