import { expect } from 'vitest'

/** Largest absolute value, 0 for none. */
export function largest(values: ArrayLike<number>): number {
  let most = 0
  for (let i = 0; i < values.length; i++) most = Math.max(most, Math.abs(values[i]))
  return most
}

export function sumOfProducts(a: Float64Array, b: Float64Array): { sum: number; absolute: number } {
  let sum = 0
  let absolute = 0
  for (let i = 0; i < a.length; i++) {
    sum += a[i] * b[i]
    absolute += Math.abs(a[i] * b[i])
  }
  return { sum, absolute }
}

/** Equal lengths, and no difference beyond the tolerance; NaN is never close. */
export function expectClose(actual: Float64Array, expected: Float64Array, tolerance: number): void {
  expect(actual.length).toBe(expected.length)
  let worst = 0
  let at = -1
  for (let i = 0; i < actual.length; i++) {
    const difference = Math.abs(actual[i] - expected[i])
    if (!(difference <= worst)) {
      worst = difference
      at = i
      if (Number.isNaN(difference)) break
    }
  }
  expect(worst, `largest difference, at ${at}`).toBeLessThanOrEqual(tolerance)
}
