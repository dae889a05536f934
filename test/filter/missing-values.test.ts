import { describe, expect, test } from 'vitest'
import { requireFinite } from '../../src/filter/missing-values.ts'

describe('requireFinite', () => {
  test.each([NaN, Infinity, -Infinity])('refuses %s and says where it stands', (value) => {
    const x = Float64Array.of(1, 2, value, NaN)
    expect(() => requireFinite('x', x)).toThrow(new RangeError(`x[2] must be a finite number, was ${value}`))
  })

  test('accepts the largest and smallest finite numbers and an empty array', () => {
    requireFinite('x', Float64Array.of(Number.MAX_VALUE, -Number.MAX_VALUE, Number.MIN_VALUE, -0))
    requireFinite('x', new Float64Array(0))
  })
})
