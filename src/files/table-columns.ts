/**
 * Reads all rows of a table into columns, and refuses at the first field that cannot be read in one way only.
 */

import Papa from 'papaparse'
import { emptyNumber, scanNumber } from './printed-number.ts'
import { type Guess, refuse, type TableOptions, type TableRefusal } from './table.ts'
import { type Dialect, isBlankRow, linesOfRow } from './table-dialect.ts'
import { labelRoles, type TableRoles } from './table-roles.ts'

export interface NumberColumn {
  /** One value per row, in the unit of the file. */
  values: Float64Array
  /** Most decimals that any field is printed with. */
  mostDecimals: number
  /** Decimals that most fields are printed with. */
  usualDecimals: number
  missing: number
  /** Line of the first missing value. */
  missingLine: number
}

export interface LabelColumn {
  codes: Int32Array
  labels: string[]
}

export interface TableColumns {
  ok: true
  rows: number
  /** Line of the file of each row. */
  lines: Int32Array
  time: NumberColumn
  values: NumberColumn[]
  /** By index of the column in the file. */
  labels: Map<number, LabelColumn>
  guess?: Guess
  warning?: string
}

const decimalsCounted = 40
/** Rows that are parsed at a time, so that the fields of a long table are not all held as strings at once. */
const chunkCharacters = 4 << 20

interface Separator {
  fields: number
  /** Fields in which it can only be the decimal separator. */
  proven: number
  line: number
  column: string
  text: string
}

function short(field: string): string {
  const s = field.trim().replace(/\s+/g, ' ')
  return s.length > 30 ? `${s.slice(0, 30)}…` : s
}

const thousandsTodo = 'Write the numbers without separators between thousands.'

function growing(rows: number): {
  grow(): void
  lines: Int32Array
  numbers: Float64Array[]
  codes: Int32Array[]
  room: number
} {
  const store = {
    room: Math.max(64, rows),
    lines: new Int32Array(0),
    numbers: [] as Float64Array[],
    codes: [] as Int32Array[],
    grow(): void {
      store.room = Math.ceil(store.room * 1.5)
      const longer = new Int32Array(store.room)
      longer.set(store.lines)
      store.lines = longer
      store.numbers = store.numbers.map((old) => {
        const next = new Float64Array(store.room)
        next.set(old)
        return next
      })
      store.codes = store.codes.map((old) => {
        const next = new Int32Array(store.room)
        next.set(old)
        return next
      })
    },
  }
  return store
}

export function readColumns(dialect: Dialect, roles: TableRoles, options: TableOptions): TableColumns | TableRefusal {
  const { body, delimiter, headerLine } = dialect
  const width = roles.columns.length
  const quotes = body.includes('"')
  const numeric = [roles.time, ...roles.values]
  const labelled = labelRoles.flatMap((role) => roles.labels[role])

  const sampleLength = dialect.sample.reduce((sum, row) => sum + row.join(' ').length + 1, 0)
  const store = growing(Math.min(1 << 24, (1.1 * body.length * dialect.sample.length) / Math.max(1, sampleLength)))
  store.lines = new Int32Array(store.room)
  store.numbers = numeric.map(() => new Float64Array(store.room))
  store.codes = labelled.map(() => new Int32Array(store.room))
  const names: string[][] = labelled.map(() => [])
  // From a field as printed, padding included, to its label's place in `names`.
  const dictionaries = labelled.map(() => new Map<string, number>())
  const histograms = numeric.map(() => new Int32Array(decimalsCounted + 1))
  const missing = numeric.map(() => 0)
  const missingLine = numeric.map(() => 0)
  const comma: Separator = { fields: 0, proven: 0, line: 0, column: '', text: '' }
  const dot: Separator = { fields: 0, proven: 0, line: 0, column: '', text: '' }

  let line = 1
  let rows = 0
  let rowsBefore = dialect.rowsBefore
  let problem: TableRefusal | undefined
  const out = emptyNumber()

  const fieldProblem = (kind: string, field: string, column: number): TableRefusal => {
    const where = { line, column: roles.columns[column].raw }
    const isTime = column === roles.time
    if (kind === 'missing') {
      return refuse('the time is missing', 'Give every line a time, or remove the line.', where)
    }
    if (kind === 'infinite') {
      return refuse(
        `"${short(field)}" is not a finite number`,
        'Put the measured value in its place, or leave the waveform out.',
        where,
      )
    }
    if (kind === 'thousands') {
      return refuse(`"${short(field)}" has separators between thousands`, thousandsTodo, where)
    }
    return refuse(
      `"${short(field)}" is not a number`,
      isTime
        ? 'Times have to be plain numbers in one unit; lines that are no part of the table need a # before them.'
        : 'Correct the value; leave the column out if it holds no amplitudes; put # before lines that are no part of the table.',
      where,
    )
  }

  const readRow = (row: string[]): TableRefusal | undefined => {
    if (row.length !== width) {
      let filled = row.length
      while (filled > width && row[filled - 1].trim() === '') filled--
      if (filled !== width) {
        const more = row.length > width
        return refuse(
          `the line has ${row.length} ${row.length === 1 ? 'field' : 'fields'}, the header (line ${headerLine}) has ${width}`,
          delimiter === ',' && more
            ? 'Where decimal or thousands commas meet commas between columns, save the table with semicolons or tabs between columns; a name with a comma needs quotes, and a first column of row names a name.'
            : 'Give every line as many fields as the header; put # before lines that are no part of the table.',
          { line },
        )
      }
    }
    if (rows === store.room) store.grow()
    store.lines[rows] = line
    for (let k = 0; k < numeric.length; k++) {
      const column = numeric[k]
      const field = row[column]
      const kind = scanNumber(field, out)
      if (kind === 'number') {
        store.numbers[k][rows] = out.value
        histograms[k][Math.min(out.decimals, decimalsCounted)]++
        if (out.separator !== '') {
          const s = out.separator === ',' ? comma : dot
          if (s.fields++ === 0 || (s.proven === 0 && !out.ambiguous)) {
            s.line = line
            s.column = roles.columns[column].raw
            s.text = field
          }
          if (!out.ambiguous) s.proven++
        }
      } else if (kind === 'missing' && k > 0) {
        store.numbers[k][rows] = Number.NaN
        if (missing[k]++ === 0) missingLine[k] = line
      } else {
        return fieldProblem(kind, field, column)
      }
    }
    for (let k = 0; k < labelled.length; k++) {
      const field = row[labelled[k]]
      let code = dictionaries[k].get(field)
      if (code === undefined) {
        const label = field.trim()
        if (label === '') {
          return refuse('the label is missing', 'Fill it in on every line.', {
            line,
            column: roles.columns[labelled[k]].raw,
          })
        }
        code = dictionaries[k].get(label)
        if (code === undefined) code = names[k].push(label) - 1
        dictionaries[k].set(label, code)
        dictionaries[k].set(field, code)
      }
      store.codes[k][rows] = code
    }
    rows++
    return undefined
  }
  // The types know chunks only for files; strings have them too, and they arrive before `parse` returns.
  const config: Papa.ParseConfig<string[]> & {
    download?: false
    worker?: false
    chunkSize: number
    chunk(results: Papa.ParseResult<string[]>, parser: Papa.Parser): void
  } = {
    delimiter,
    newline: '\n',
    chunkSize: chunkCharacters,
    chunk(results, parser) {
      const broken = results.errors.find((error) => error.type === 'Quotes')
      const data = results.data
      for (let r = 0; r < data.length; r++) {
        const row = data[r]
        if (broken && r >= (broken.row ?? 0)) {
          problem = refuse(
            'a quote is opened and not closed in the right place',
            'Close the quote, or double it inside a quoted field.',
            { line },
          )
          break
        }
        if (!isBlankRow(row)) {
          if (rowsBefore === 0) problem = readRow(row)
          else rowsBefore--
          if (problem) break
        }
        line += quotes ? linesOfRow(row) : 1
      }
      if (problem) parser.abort()
    },
  }
  Papa.parse<string[]>(body, config)
  if (problem) return problem
  if (rows === 0)
    return refuse('the table has a header but no numbers', 'Add a line for each time.', { line: headerLine })

  const decision = decimalSeparator(comma, dot, delimiter, options)
  if ('ok' in decision) return decision
  const finish = (k: number): NumberColumn => {
    let most = 0
    let usual = 0
    for (let d = 0; d <= decimalsCounted; d++) {
      if (histograms[k][d] > 0) most = d
      if (histograms[k][d] > histograms[k][usual]) usual = d
    }
    const values = store.numbers[k].subarray(0, rows)
    return { values, mostDecimals: most, usualDecimals: usual, missing: missing[k], missingLine: missingLine[k] }
  }
  const labels = new Map<number, LabelColumn>()
  labelled.forEach((column, k) => {
    labels.set(column, { codes: store.codes[k].subarray(0, rows), labels: names[k] })
  })
  return {
    ok: true,
    rows,
    lines: store.lines.subarray(0, rows),
    time: finish(0),
    values: roles.values.map((_, j) => finish(j + 1)),
    labels,
    ...decision,
  }
}

/** Which of point and comma is the decimal separator, from all numbers of the table; refuses when they contradict. */
function decimalSeparator(
  comma: Separator,
  dot: Separator,
  delimiter: string,
  options: TableOptions,
): TableRefusal | { guess?: Guess; warning?: string } {
  const place = (s: Separator): { line: number; column: string } => ({ line: s.line, column: s.column })
  const name = (s: Separator): string => (s === comma ? 'comma' : 'point')
  if (options.decimal === '.' || options.decimal === ',') {
    const wrong = options.decimal === '.' ? comma : dot
    if (wrong.fields > 0) {
      return refuse(
        `"${short(wrong.text)}" has a ${name(wrong)}, but the decimal separator is said to be a ${options.decimal === '.' ? 'point' : 'comma'}`,
        `${thousandsTodo} Or say that the decimal separator is a ${name(wrong)}.`,
        place(wrong),
      )
    }
    return { guess: { what: 'decimal', value: options.decimal, from: 'stated', why: 'as you said' } }
  }
  if (comma.fields > 0 && dot.fields > 0) {
    const odd =
      comma.proven > 0 !== dot.proven > 0 ? (comma.proven > 0 ? dot : comma) : comma.fields <= dot.fields ? comma : dot
    return refuse(
      `"${short(odd.text)}" has a ${name(odd)} where other numbers of the table have a ${name(odd === comma ? dot : comma)}`,
      `Use one decimal separator throughout. ${thousandsTodo}`,
      place(odd),
    )
  }
  if (comma.fields > 0) {
    if (comma.proven === 0) {
      return refuse(
        `"${short(comma.text)}" can be read two ways: the comma may be a decimal comma or separate thousands`,
        'Say that the decimal separator is a comma, or write the numbers without separators between thousands.',
        place(comma),
      )
    }
    return { guess: { what: 'decimal', value: ',', from: 'inferred', why: `numbers such as "${short(comma.text)}"` } }
  }
  if (dot.fields > 0) {
    const guess: Guess = { what: 'decimal', value: '.', from: 'inferred', why: `numbers such as "${short(dot.text)}"` }
    if (dot.proven > 0 || delimiter === ',') return { guess }
    return {
      guess,
      warning: `Points are read as decimal points, although every number with one has three digits behind it ("${short(dot.text)}", line ${dot.line}), as separated thousands would.`,
    }
  }
  return {}
}
