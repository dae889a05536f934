import Papa from 'papaparse'
import fc from 'fast-check'
import { describe, expect, test } from 'vitest'
import { readTable, tableToCsv, waveformOf } from '../../src/files/index.ts'

describe('a table written as CSV', () => {
  test('follows RFC 4180: commas, CRLF, quotes doubled inside quotes', () => {
    expect(
      tableToCsv(
        ['a', 'b, c'],
        [
          ['say "x"', 1.5],
          ['two\nlines', -0.1],
        ],
      ),
    ).toBe('a,"b, c"\r\n"say ""x""",1.5\r\n"two\nlines",-0.1\r\n')
  })

  test('gives back the same doubles and texts to another CSV reader', () => {
    const number = fc.double({ noNaN: true, noDefaultInfinity: true })
    const text = fc.string().filter((s) => !/^\s*[=+\-@\uff1d\uff0b\uff0d\uff20]|\r/.test(s) && !/^\t/.test(s))
    fc.assert(
      fc.property(fc.array(fc.tuple(text, number), { minLength: 1 }), (rows) => {
        const parsed = Papa.parse<string[]>(tableToCsv(['name', 'value'], rows), {
          delimiter: ',',
          newline: '\r\n',
        }).data
        expect(parsed.length).toBe(rows.length + 2)
        rows.forEach(([name, value], i) => {
          expect(parsed[i + 1][0]).toBe(name)
          expect(Number(parsed[i + 1][1])).toBe(value === 0 ? 0 : value)
        })
      }),
    )
  })

  test('no text cell can run as a formula in a spreadsheet program', () => {
    // Source: OWASP, "CSV Injection" (from memory).
    for (const text of ['=1+1', '+1+1', '-1+1', '@SUM(A1)', '\t=1', '\r=1', '  =HYPERLINK("x")', '\uff1d1']) {
      const cell = Papa.parse<string[]>(tableToCsv(['h'], [[text]]), { delimiter: ',', newline: '\r\n' }).data[1][0]
      expect(cell).toBe(`'${text}`)
      const name = Papa.parse<string[]>(tableToCsv([text], []), { delimiter: ',', newline: '\r\n' }).data[0][0]
      expect(name).toBe(`'${text}`)
    }
  })

  test('negative numbers stay numbers, as numbers and as text', () => {
    expect(tableToCsv(['x', 'y'], [[-1.5, '-2.5e-3']])).toBe('x,y\r\n-1.5,-2.5e-3\r\n')
  })

  test('a number that is not finite and a row of another length are refused', () => {
    expect(() => tableToCsv(['x'], [[Number.NaN]])).toThrow('rows[0][0] ("x") must be finite, was NaN')
    expect(() => tableToCsv(['x'], [[1, 2]])).toThrow(RangeError)
  })

  test('waveforms are read back bit for bit', () => {
    const values = Array.from({ length: 50 }, (_, i) => 7 * Math.sin(i / 3))
    const table = readTable(
      tableToCsv(
        ['time_ms', 'Cz (µV)'],
        values.map((v, i) => [4 * i, v]),
      ),
    )
    if (!table.ok) throw new Error(table.reason)
    expect([...waveformOf(table, 'condition', 'Cz').values]).toEqual(values)
  })
})
