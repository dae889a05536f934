import type { FidelityRow, NoValue } from '../evidence/fidelity.ts'
import { exact, fixed, signed } from './number.ts'
import { windowWords } from './protocol-line.ts'

/** What a row of the readout is called: the figure, then where it is measured. */
export function rowWords(row: FidelityRow): { name: string; where: string } {
  const { figure, window, fraction, atMs } = row.label
  const span = windowWords(window.fromMs, window.toMs)
  const percent = `${exact(Number(((fraction ?? 0.5) * 100).toPrecision(10)))} %`
  switch (figure) {
    case 'mean':
      return { name: 'mean amplitude', where: span }
    case 'moment':
      return { name: 'value', where: `at ${span}` }
    case 'peak-amplitude':
      return { name: 'peak amplitude', where: span }
    case 'area':
      return { name: 'signed area', where: span }
    case 'peak-latency':
      return { name: 'peak latency', where: span }
    case 'area-latency':
      return { name: `fractional-area latency, ${percent} of the area`, where: span }
    case 'onset-latency':
      return { name: `onset latency, ${percent} of the peak`, where: span }
    case 'false-deflection':
      return {
        name: 'strongest false deflection before onset',
        where: atMs === undefined ? '' : `at ${fixed(atMs, 0)} ms`,
      }
  }
}

/** A value of the readout in its unit's usual digits, or why there is none. */
export function valueWords(value: number | NoValue, unit: FidelityRow['unit']): string {
  if (typeof value === 'string') return value
  return fixed(value, decimalsOf(unit))
}

export function changeWords(change: number, unit: FidelityRow['unit']): string {
  return signed(change, decimalsOf(unit))
}

export function decimalsOf(unit: FidelityRow['unit']): number {
  return unit === 'ms' ? 1 : unit === 'µV' ? 2 : 3
}
