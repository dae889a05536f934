import { describe, expect, test } from 'vitest'
import { emptyNumber, scanNumber } from '../../src/files/printed-number.ts'

function scan(field: string) {
  const out = emptyNumber()
  const kind = scanNumber(field, out)
  return { kind, ...out }
}

describe('a printed number', () => {
  test.each([
    ['1.25', 1.25, 2],
    ['-3', -3, 0],
    ['+.5', 0.5, 1],
    ['5.', 5, 0],
    ['  7.0 ', 7, 1],
    ['2.5e-5', 2.5e-5, 6],
    ['1.5E+03', 1500, 0],
    ['0,004', 0.004, 3],
    ['-1,25e2', -125, 0],
    ['\u22124.5', -4.5, 1],
    ['1e\u22122', 0.01, 2],
  ])('"%s" is %d with %d decimals', (field, value, decimals) => {
    expect(scan(field)).toMatchObject({ kind: 'number', value, decimals })
  })

  test.each(['', ' ', 'NaN', 'n/a', 'NA', '-', '.', '#N/A', 'null'])('"%s" is a missing value', (field) => {
    expect(scan(field).kind).toBe('missing')
  })

  test.each(['inf', '-Infinity', '1e999', '∞'])('"%s" is infinite', (field) => {
    expect(scan(field).kind).toBe('infinite')
  })

  test.each(['1,234.5', '1.234,5', '1,234,567', '1 234', '1\u00a0234,5', "12'345", '1\u202f234'])(
    '"%s" has separators between thousands',
    (field) => {
      expect(scan(field).kind).toBe('thousands')
    },
  )

  test.each(['0x1F', '5 µV', '1.2.3', '1e', 'e5', '--5', '1-2', '12:30', 'Infinite', '1_000', '5%', '1e+'])(
    '"%s" is text, not a number',
    (field) => {
      expect(scan(field).kind).toBe('text')
    },
  )

  test('a separator before exactly three digits is ambiguous unless no thousands are written so', () => {
    expect(scan('1,234').ambiguous).toBe(true)
    expect(scan('-12.345').ambiguous).toBe(true)
    for (const field of ['0,123', '1,23', '1234,567', '1,2345', ',123', '1,234e2'])
      expect(scan(field).ambiguous).toBe(false)
  })
})
