import fc from 'fast-check'
import { describe, expect, test } from 'vitest'
import { brief, exact, fixed, list, measured, parseNumber, signed } from '../../src/words/number.ts'

const anyNumber = fc.double({ noNaN: true, noDefaultInfinity: true })
/** Sizes that are met: from a millionth of a millionth to a million millions, and exact zeros. */
const usual = fc
  .tuple(fc.double({ min: 1, max: 10, noNaN: true }), fc.integer({ min: -12, max: 12 }), fc.constantFrom(-1, 0, 1))
  .map(([mantissa, exponent, sign]) => sign * mantissa * 10 ** exponent)

describe('fixed', () => {
  test.each([
    [1.005, 1, '1.0'],
    [-1.18, 2, '−1.18'],
    [-0.001, 2, '0.00'],
    [-0, 2, '0.00'],
    [0, 0, '0'],
    [123456.7, 0, '123457'],
    [1e-9, 2, '0.00'],
    [1e21, 0, '1000000000000000000000'],
    [-2e21, 1, '−2000000000000000000000'],
    [Number.NaN, 2, '–'],
    [Number.POSITIVE_INFINITY, 2, '–'],
  ])('%d with %d decimals is %s', (value, decimals, text) => {
    expect(fixed(value, decimals)).toBe(text)
  })

  test('has no exponent, no plain minus and no signed zero, whatever the number', () => {
    fc.assert(
      fc.property(anyNumber, fc.integer({ min: 0, max: 6 }), (value, decimals) => {
        const text = fixed(value, decimals)
        expect(text).toMatch(/^−?\d+(\.\d+)?$/)
        if (/^−?[0.]+$/.test(text)) expect(text).not.toContain('−')
      }),
    )
  })

  test('lies within half a unit of its last decimal', () => {
    fc.assert(
      fc.property(usual, fc.integer({ min: 0, max: 6 }), (value, decimals) => {
        const error = Math.abs(parseNumber(fixed(value, decimals)) - value)
        expect(error).toBeLessThanOrEqual(0.5 * 10 ** -decimals + 1e-15 * Math.abs(value))
      }),
    )
  })
})

describe('signed', () => {
  test.each([
    [0.4, 1, '+0.4'],
    [-0.4, 1, '−0.4'],
    [0.04, 1, '0.0'],
    [-0.04, 1, '0.0'],
    [0, 1, '0.0'],
    [Number.NaN, 1, '–'],
  ])('%d with %d decimals is %s', (value, decimals, text) => {
    expect(signed(value, decimals)).toBe(text)
  })
})

describe('brief', () => {
  test.each([
    [1e-9, '0.000000001'],
    [1.234e-13, '0.000000000000123'],
    [123456, '123000'],
    [0.0159154943, '0.0159'],
    [29.06, '29.1'],
    [999.9, '1000'],
    [0.09999, '0.1'],
    [1000, '1000'],
    [-0.5, '−0.5'],
    [0, '0'],
    [-0, '0'],
    [-1e-200, '0'],
    [1e21, '1000000000000000000000'],
    [Number.NaN, '–'],
    [Number.NEGATIVE_INFINITY, '–'],
  ])('%d in three digits is %s', (value, text) => {
    expect(brief(value)).toBe(text)
  })

  test('is the number rounded to its digits, without exponent, trailing zeros or a signed zero', () => {
    fc.assert(
      fc.property(usual, fc.integer({ min: 1, max: 12 }), (value, digits) => {
        const text = brief(value, digits)
        expect(text).toMatch(/^−?\d+(\.\d*[1-9])?$/)
        expect(parseNumber(text)).toBe(Number(value.toPrecision(digits)) + 0)
      }),
    )
  })

  test('has no exponent for any number at all', () => {
    fc.assert(
      fc.property(anyNumber, (value) => {
        expect(brief(value)).toMatch(/^−?\d+(\.\d*[1-9])?$/)
      }),
    )
  })
})

describe('exact', () => {
  test('comes back as it went out for every number of up to twelve digits', () => {
    fc.assert(
      fc.property(
        fc.integer({ min: -999_999_999_999, max: 999_999_999_999 }),
        fc.integer({ min: 0, max: 20 }),
        (digits, decimals) => {
          const value = Number(`${digits}e-${decimals}`)
          expect(parseNumber(exact(value))).toBe(value + 0)
        },
      ),
    )
  })

  test('keeps the cutoff of a time constant to twelve digits', () => {
    expect(exact(1 / (2 * Math.PI * 10))).toBe('0.0159154943092')
    expect(exact(1 / (2 * Math.PI * 10_000))).toBe('0.0000159154943092')
  })
})

describe('parseNumber', () => {
  test.each([
    ['1', 1],
    [' 0.5 ', 0.5],
    ['0,5', 0.5],
    ['.5', 0.5],
    ['5.', 5],
    ['−200', -200],
    ['-200', -200],
    ['+3', 3],
    ['1e−3', 0.001],
    ['2E3', 2000],
  ])('%j is %d', (text, value) => {
    expect(parseNumber(text)).toBe(value)
  })

  test.each([
    '',
    ' ',
    '.',
    '-',
    '−',
    'abc',
    '1 2',
    '1,2,3',
    '1.234,5',
    '1.2.3',
    '--1',
    '0x10',
    'NaN',
    'Infinity',
    '1e',
    'e5',
    '1 Hz',
    '1e999',
    '–5',
    '½',
  ])('%j is refused', (text) => {
    expect(parseNumber(text)).toBeNaN()
  })
})

describe('list', () => {
  test.each([
    [[], ''],
    [['a'], 'a'],
    [['a', 'b'], 'a and b'],
    [['a', 'b', 'c'], 'a, b and c'],
  ])('%j is %j', (items, text) => {
    expect(list(items)).toBe(text)
  })
})

describe('measured', () => {
  test.each([
    [0.998, 2, '1.0'],
    [0.2, 2, '0.20'],
    [-0.0996, 2, '−0.10'],
    [29.14, 2, '29'],
    [1234, 2, '1234'],
    [99.96, 3, '100'],
    [0, 2, '0'],
    [Number.NaN, 2, '–'],
  ])('%d with %d digits is %s', (value, digits, text) => {
    expect(measured(value, digits)).toBe(text)
  })

  test('has the value rounded to its digits, and at least so many of them', () => {
    fc.assert(
      fc.property(usual, fc.integer({ min: 1, max: 6 }), (value, digits) => {
        const text = measured(value, digits)
        fc.pre(value !== 0)
        const number = Number(text.replace('−', '-'))
        expect(Math.abs(number - value)).toBeLessThanOrEqual(
          0.5000001 * 10 ** (Math.floor(Math.log10(Math.abs(value))) + 1 - digits),
        )
        expect(text.replace(/[−.]/g, '').replace(/^0+/, '').length).toBeGreaterThanOrEqual(digits)
      }),
    )
  })
})
