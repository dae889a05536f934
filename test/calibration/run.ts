import { existsSync, readFileSync, renameSync, writeFileSync } from 'node:fs'
import { join } from 'node:path'
import type { CalibrationRow } from '../../src/evidence/index.ts'
import { calibrate } from './calibrate.ts'
import { tableSource } from './table-source.ts'
import { SETTINGS } from './settings.ts'

/**
 * `npm run calibrate`: how often the late-only fit is right, on seeded draws, setting by setting, into calibration.json and
 * the table that the page shows.
 *
 *   npm run calibrate                 every setting that the table does not have yet with so many draws
 *   npm run calibrate -- --draws 100  fewer draws
 *   npm run calibrate -- --fresh      every setting anew
 *   npm run calibrate -- alpha        only settings with that in their name
 */
const args = process.argv.slice(2)
const numberAfter = (name: string, otherwise: number) => {
  const at = args.indexOf(name)
  return at < 0 ? otherwise : Number(args.splice(at, 2)[1])
}
const draws = numberAfter('--draws', 400)
const seed = numberAfter('--seed', 20260)
const fresh = args.includes('--fresh')
const wanted = args.find((argument) => !argument.startsWith('--')) ?? ''
if (!Number.isInteger(draws) || draws < 2)
  throw new RangeError(`--draws must be a whole number of at least 2, was ${draws}`)

interface Table {
  note: string
  seed: number
  rows: CalibrationRow[]
}

const file = join(import.meta.dirname, 'calibration.json')
const source = join(import.meta.dirname, '../../src/evidence/calibration-table.ts')
const note =
  'Late-only fit on seeded draws: 250 Hz, 500 samples, 40 trials, a late positivity, 1 Hz high-pass of order 2 per pass both ways and 1/f ' +
  'noise where the title says nothing else. Made by npm run calibrate.'
const table: Table = !fresh && existsSync(file) ? JSON.parse(readFileSync(file, 'utf8')) : { note, seed, rows: [] }
if (table.seed !== seed) throw new RangeError(`the table was made with seed ${table.seed}; --fresh begins another`)

// rows are kept by what was drawn; what they are called may change
table.rows = table.rows.flatMap((row) => {
  const setting = SETTINGS.find(({ id }) => id === row.id)
  return setting ? [{ ...row, title: setting.title, kind: setting.kind }] : []
})

// what is wrong in two ways comes last, so that a run that is stopped has the plain settings
const order = [...SETTINGS].sort((one, other) => Number(one.id.includes('+')) - Number(other.id.includes('+')))
for (const setting of order) {
  if (!setting.id.includes(wanted)) continue
  const known = table.rows.find(({ id }) => id === setting.id)
  if (known && known.draws === draws) continue
  const began = performance.now()
  const row = calibrate(setting, draws, seed)
  const place = (id: string) => SETTINGS.findIndex((one) => one.id === id)
  table.rows = [...table.rows.filter(({ id }) => id !== setting.id), row]
  table.rows.sort((a, b) => place(a.id) - place(b.id))
  write(table)
  const percent = (rate: number) => `${(100 * rate).toFixed(1)} %`
  console.log(
    `${setting.title}: false alarms ${percent(row.falseAlarms)}, found ${percent(row.found)}, covered ${percent(row.covered)}, ` +
      `it can ${row.verdicts['it can']} of ${draws} (${((performance.now() - began) / 1000).toFixed(0)} s)`,
  )
}

/** Whole or not at all, so that a run can be stopped at any moment. */
function write(made: Table): void {
  writeFileSync(`${file}.part`, `${JSON.stringify(made, null, 2)}\n`)
  renameSync(`${file}.part`, file)
  writeFileSync(source, tableSource(made.rows))
}

write(table)
