/**
 * How a text is cut into rows and fields: line ends, comment lines, delimiter, and where the header is.
 */

import Papa from 'papaparse'
import { type Delimiter, type Guess, refuse, type TableOptions, type TableRefusal } from './table.ts'
import { unitOf } from './table-units.ts'

export interface Dialect {
  ok: true
  /** The text with '\n' line ends and blanked comment lines, so that lines keep their numbers. */
  body: string
  delimiter: Delimiter
  header: string[]
  headerLine: number
  /** A unit for each column, from a line of units under the header; empty where there is none. */
  units: string[]
  /** Rows of the body before the data: the header (unless it stands in a comment line) and a line of units. */
  rowsBefore: number
  /** The first data rows. */
  sample: string[][]
  guess: Guess
}

const sampleRows = 60
/** A header of ten thousand columns fits into this. */
const longestLine = 2_000_000

const delimiterNames: Record<Delimiter, string> = { ',': 'comma', ';': 'semicolon', '\t': 'tab' }

/** Whether a row of fields has nothing in it: an empty line, or one of delimiters only. */
export function isBlankRow(row: readonly string[]): boolean {
  for (const field of row) if (field !== '' && field.trim() !== '') return false
  return true
}

/** How many lines of the file a row takes: one, and one more for each line break inside a quoted field. */
export function linesOfRow(row: readonly string[]): number {
  let lines = 1
  for (const field of row) {
    for (let at = field.indexOf('\n'); at >= 0; at = field.indexOf('\n', at + 1)) lines++
  }
  return lines
}

/** Drops empty fields at the end, which delimiters at the line's end make. */
export function trimmedLength(row: readonly string[]): number {
  let n = row.length
  while (n > 0 && row[n - 1].trim() === '') n--
  return n
}

function looksNumeric(field: string): boolean {
  return /^\s*[+-]?(\d|[.,]\d)[\d.,]*(e[+-]?\d+)?\s*$/i.test(field)
}

function rowsOf(text: string, delimiter: Delimiter): string[][] {
  return Papa.parse<string[]>(text, { delimiter, newline: '\n', preview: 4 * sampleRows }).data
}

export function recogniseDialect(text: string, options: TableOptions): Dialect | TableRefusal {
  let body = text.startsWith('\ufeff') ? text.slice(1) : text
  if (body.includes('\r')) body = body.replace(/\r\n?/g, '\n')
  let lastComment = ''
  let lastCommentLine = 0
  if (/^[ \t]*#/m.test(body)) {
    // A comment directly above the first numbers may be the header (some programs write it so).
    const lines = body.slice(0, longestLine).split('\n', 10_000)
    for (let i = 0; i < lines.length; i++) {
      const line = lines[i].trim()
      if (line === '') continue
      if (!line.startsWith('#')) break
      lastComment = line.replace(/^#+\s*/, '')
      lastCommentLine = i + 1
    }
    body = body.replace(/^[ \t]*#.*$/gm, '')
  }
  // Some spreadsheet programs write the delimiter into a first line of its own.
  const separatorLine = /^\s*"?sep=(.)"?[ ]*(?=\n)/i.exec(body)
  if (separatorLine) body = body.slice(separatorLine[0].length)
  const firstContent = body.search(/\S/)
  if (firstContent < 0) {
    return refuse('the file is empty', 'Open a table with a line of column names and a line for each time.')
  }
  if (
    body.length - firstContent > longestLine &&
    !body.slice(firstContent, firstContent + longestLine).includes('\n')
  ) {
    return refuse('a single line is longer than two million characters', 'Write a table with one line for each time.')
  }
  // Leading blank lines (comments are blank by now) do not belong to the sample, but they count as lines.
  const lineStart = body.lastIndexOf('\n', firstContent) + 1
  const linesBefore = body.slice(0, lineStart).split('\n').length - 1
  let head = body.slice(lineStart, lineStart + longestLine)
  if (lineStart + head.length < body.length) head = head.slice(0, head.lastIndexOf('\n') + 1)

  const known: Delimiter[] = ['\t', ';', ',']
  const announced = known.filter((delimiter) => delimiter === separatorLine?.[1])
  const candidates = options.delimiter ? [options.delimiter] : announced.length > 0 ? announced : known
  let fieldsBelow = 0
  let best: { delimiter: Delimiter; rows: string[][]; share: number; fields: number } | undefined
  for (const delimiter of candidates) {
    const rows = rowsOf(head, delimiter)
    const filled = rows.filter((row) => !isBlankRow(row)).slice(0, sampleRows)
    const fields = filled.length > 0 ? trimmedLength(filled[0]) : 0
    fieldsBelow = Math.max(fieldsBelow, filled.length > 0 ? trimmedLength(filled[filled.length - 1]) : 0)
    const alike = filled.filter(
      (row) => row.length >= fields && trimmedLength(row) <= Math.max(fields, filled[0].length),
    )
    const share = fields < 2 ? 0 : alike.length / filled.length
    // A semicolon or a tab that cuts all rows alike is meant so; a comma may be a decimal comma.
    if (!best || share > best.share + 1e-9 || (share === 0 && fields > best.fields))
      best = { delimiter, rows, share, fields }
    if (share === 1) break
  }
  if (!best) return refuse('the file is empty', 'Open a table with a line of column names and a line for each time.')
  const delimiter = best.delimiter
  if (best.fields < 2) {
    const line = head.slice(0, head.indexOf('\n') < 0 ? head.length : head.indexOf('\n'))
    if (fieldsBelow > 1) {
      return refuse(
        `the first line has one field, the lines below it have ${fieldsBelow}`,
        'The first line has to name the columns; put # before a title.',
        { line: linesBefore + 1 },
      )
    }
    const spaced = line.trim().split(/\s+|\|/).length > 1
    return refuse(
      spaced ? 'no comma, semicolon or tab separates the columns' : 'the table has only one column',
      spaced
        ? 'Save it with commas, semicolons or tabs between the columns; put # before lines that are no part of the table.'
        : 'It needs a column with times and at least one with values, separated by commas, semicolons or tabs.',
      { line: linesBefore + 1 },
    )
  }
  const guess: Guess = {
    what: 'delimiter',
    value: delimiter,
    from: options.delimiter ? 'stated' : 'inferred',
    why: `a ${delimiterNames[delimiter]} separates the columns`,
  }
  let line = linesBefore + 1
  let first = 0
  while (isBlankRow(best.rows[first])) line += linesOfRow(best.rows[first++])
  let header = best.rows[first]
  let rowsBefore = 1
  if (header.every((field) => field.trim() === '' || looksNumeric(field))) {
    const names = Papa.parse<string[]>(lastComment, { delimiter, newline: '\n' }).data[0] ?? []
    const fits = names.length === header.length && names.some((name) => name.trim() !== '' && !looksNumeric(name))
    if (!fits) {
      return refuse(
        'the first line has numbers only, so the columns have no names',
        'Put a line with the names of the columns above them, such as time_ms and Cz.',
        { line },
      )
    }
    header = names
    rowsBefore = 0
    line = lastCommentLine
  } else first++
  const sample = best.rows.slice(first).filter((row) => !isBlankRow(row))
  let units: string[] = []
  if (
    sample.length > 1 &&
    sample[0].every((field) => field.trim() === '' || unitOf(field.trim().replace(/^[([](.*)[)\]]$/, '$1')))
  ) {
    units = (sample.shift() as string[]).map((field) => field.trim().replace(/^[([](.*)[)\]]$/, '$1'))
    rowsBefore++
  }
  return {
    ok: true,
    body,
    delimiter,
    header,
    headerLine: line,
    units,
    rowsBefore,
    sample: sample.slice(0, sampleRows),
    guess,
  }
}
