/** Writes a table as CSV that reads back to the same numbers and that no spreadsheet program takes for formulas. */

/**
 * Text that a spreadsheet program would run as a formula when it opens the file.
 * Source: OWASP, "CSV Injection": cells that begin with = + - @, a tab or a carriage return (from memory); the full-width
 * forms of these signs are treated alike.
 */
const formula = /^\s*[=+\-@\uff1d\uff0b\uff0d\uff20]|^[\t\r]/
const plainNumber = /^[+-]?(\d+\.?\d*|\.\d+)(e[+-]?\d+)?$/i

function textCell(text: string): string {
  const safe = formula.test(text) && !plainNumber.test(text) ? `'${text}` : text
  return /[",\r\n]|^\s|\s$/.test(safe) ? `"${safe.replaceAll('"', '""')}"` : safe
}

/**
 * A table as CSV (RFC 4180): commas, CRLF line ends, quotes where they are needed, a header line.
 * @param header names of the columns
 * @param rows numbers are written in full precision, so that they read back to the same double; text that a spreadsheet
 *   program would take for a formula gets an apostrophe before it
 * @throws RangeError when a row has another number of cells than the header, or a number is not finite (write what it means
 *   as text instead: 'no peak')
 */
export function tableToCsv(header: readonly string[], rows: readonly (readonly (string | number)[])[]): string {
  const lines = [header.map(textCell).join(',')]
  rows.forEach((row, r) => {
    if (row.length !== header.length) {
      throw new RangeError(`rows[${r}] must have as many cells as the header (${header.length}), has ${row.length}`)
    }
    const cells = row.map((cell, c) => {
      if (typeof cell === 'string') return textCell(cell)
      if (!Number.isFinite(cell)) throw new RangeError(`rows[${r}][${c}] ("${header[c]}") must be finite, was ${cell}`)
      return String(cell)
    })
    lines.push(cells.join(','))
  })
  return `${lines.join('\r\n')}\r\n`
}
