import type { CalibrationRow } from '../../src/evidence/index.ts'

/** The table as source of the page, as the formatter would have it. */
export function tableSource(rows: readonly CalibrationRow[]): string {
  return `import type { CalibrationRow } from './calibration-row.ts'

/** Made by npm run calibrate, from test/calibration/calibration.json. */
export const CALIBRATION: readonly CalibrationRow[] = [
${rows.map((row) => `  ${literal(row, '  ')},\n`).join('')}]
`
}

function literal(value: unknown, indent: string): string {
  if (typeof value === 'string') return `'${value.replace(/[\\']/g, '\\$&')}'`
  if (typeof value !== 'object' || value === null) return String(value)
  const entries = Object.entries(value).map(([key, item]) => {
    const name = /^\w+$/.test(key) ? key : `'${key}'`
    return `${indent}  ${name}: ${literal(item, `${indent}  `)},\n`
  })
  return `{\n${entries.join('')}${indent}}`
}
