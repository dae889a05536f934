import fc from 'fast-check'
import { describe, expect, test } from 'vitest'
import { standardErrorOfMean } from '../../src/erp/standard-error-of-mean.ts'

const trials = (...rows: number[][]) => rows.map((row) => Float64Array.from(row))

describe('standardErrorOfMean', () => {
  test('is SD over the root of N: 2, 4, 4, 4, 5, 5, 7, 9 has a sum of squares of 32 about its mean', () => {
    const values = [2, 4, 4, 4, 5, 5, 7, 9].map((value) => [value])
    expect(standardErrorOfMean(trials(...values))[0]).toBeCloseTo(Math.sqrt(32 / 7 / 8), 14)
  })

  test('of two trials is half their distance', () => {
    expect([...standardErrorOfMean(trials([1, -3], [4, -3]))]).toEqual([1.5, 0])
  })

  test('does not change with a constant added to every trial, and scales with its unit', () => {
    const row = fc.array(fc.double({ min: -100, max: 100, noNaN: true }), { minLength: 3, maxLength: 3 })
    fc.assert(
      fc.property(fc.array(row, { minLength: 2, maxLength: 12 }), (rows) => {
        const errors = standardErrorOfMean(trials(...rows))
        const moved = standardErrorOfMean(trials(...rows.map((values) => values.map((value) => -3 * value + 70))))
        errors.forEach((error, i) => expect(moved[i]).toBeCloseTo(3 * error, 9))
      }),
    )
  })

  test.each([
    ['one trial', trials([1, 2]), 'trials must be at least 2, were 1'],
    ['trials of different lengths', trials([1, 2], [1]), 'trials must have 2 samples each, one has 1'],
  ])('refuses %s', (_, given, message) => {
    expect(() => standardErrorOfMean(given)).toThrow(new RangeError(message))
  })
})
