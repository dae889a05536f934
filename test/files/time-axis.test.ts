import fc from 'fast-check'
import { describe, expect, test } from 'vitest'
import { firstLabel, fitLabels, neatRateHz } from '../../src/files/time-axis.ts'

/** Labels of a regular axis, printed with so many decimals. */
function printedLabels(rateHz: number, first: number, n: number, decimals: number): Float64Array {
  return Float64Array.from({ length: n }, (_, i) => Number((first + (i * 1000) / rateHz).toFixed(decimals)))
}

function rateOf(labels: Float64Array, decimals: number): number | string | undefined {
  const fitted = fitLabels(labels, 10 ** -decimals)
  if (!fitted.ok) return fitted.problem.kind
  return neatRateHz(labels, fitted.fit, 1000)?.rateHz
}

describe('rounded time labels', () => {
  test.each([
    [256, 1],
    [256, 0],
    [512, 1],
    [512, 0],
    [1024, 1],
    [2048, 2],
    [300, 1],
    [160, 0],
    [250, 0],
    [1000, 0],
    [4096, 3],
  ])('%d Hz is recovered from times in ms with %d decimals', (rate, decimals) => {
    for (const first of [0, -200, -101.5625, -99.9]) {
      expect(rateOf(printedLabels(rate, first, 300, decimals), decimals)).toBe(rate)
    }
  })

  test('labels rounded half to even, as NumPy does, fit as well', () => {
    const even = (x: number): number => (Math.abs(x % 1) === 0.5 ? 2 * Math.round(x / 2) : Math.round(x))
    const labels = Float64Array.from({ length: 200 }, (_, i) => even((i * 10_000) / 512) / 10)
    expect(rateOf(labels, 1)).toBe(512)
  })

  test('a rate that nobody uses is kept when the labels are printed finely enough', () => {
    expect(rateOf(printedLabels(508.6, 0, 400, 3), 3)).toBeCloseTo(508.6, 1)
    expect(
      rateOf(
        Float64Array.from({ length: 100 }, (_, i) => 3 * i),
        0,
      ),
    ).toBeCloseTo(1000 / 3, 9)
  })

  test('labels with six significant digits are rounded more coarsely late than early, and still fit', () => {
    const labels = Float64Array.from({ length: 400 }, (_, i) => Number(((i * 1000) / 256).toPrecision(6)))
    expect(rateOf(labels, 5)).toBe(256)
  })

  test('the regular axis never lies further from a label than the rounding', () => {
    fc.assert(
      fc.property(
        fc.constantFrom(100, 250, 256, 500, 512, 1000, 1024, 2048),
        fc.integer({ min: -400, max: 100 }),
        fc.integer({ min: 16, max: 800 }),
        fc.integer({ min: 1, max: 6 }),
        (rate, firstSample, n, decimals) => {
          const labels = printedLabels(rate, (firstSample * 1000) / rate, n, decimals)
          const fitted = fitLabels(labels, 10 ** -decimals)
          if (!fitted.ok) throw new Error(fitted.problem.kind)
          const found = neatRateHz(labels, fitted.fit, 1000)?.rateHz as number
          const step = 1000 / found
          const first = firstLabel(labels, step, fitted.fit.tolerance)
          for (let i = 0; i < n; i++) {
            expect(Math.abs(first + i * step - labels[i])).toBeLessThanOrEqual(0.51 * 10 ** -decimals + 1e-5)
          }
        },
      ),
      { numRuns: 60 },
    )
  })

  test('time zero stays a sample when a label says 0', () => {
    const labels = printedLabels(256, -51 * 3.90625, 200, 1)
    const fitted = fitLabels(labels, 0.1)
    if (!fitted.ok) throw new Error('not fitted')
    expect(firstLabel(labels, 1000 / 256, fitted.fit.tolerance)).toBe(-51 * 3.90625)
  })
})

test('a first time in single precision is the decimal that it stands for', () => {
  const labels = Float64Array.from({ length: 100 }, (_, i) => Math.fround(i / 512 - 0.3))
  const fitted = fitLabels(labels, 1e-18)
  if (!fitted.ok) throw new Error('not fitted')
  expect(firstLabel(labels, 1 / 512, fitted.fit.tolerance)).toBe(-0.3)
})

describe('times that are not regular', () => {
  const regular = (): number[] => Array.from({ length: 100 }, (_, i) => 4 * i)
  test('a missing sample is a gap, and it is told where', () => {
    const labels = Float64Array.from(regular().filter((_, i) => i !== 40))
    const fitted = fitLabels(labels, 1)
    expect(fitted).toMatchObject({ ok: false, problem: { kind: 'gap', index: 40, usual: 4, found: 8 } })
  })

  test('a missing sample among whole milliseconds at 1000 Hz is not hidden by an odd rate', () => {
    for (const missing of [1, 20, 50, 98]) {
      const labels = Float64Array.from(Array.from({ length: 100 }, (_, i) => i).filter((i) => i !== missing))
      expect(typeof rateOf(labels, 0)).not.toBe('number')
    }
  })

  test('times that repeat, go back or jitter are each called so', () => {
    const kind = (times: number[]): string => {
      const fitted = fitLabels(Float64Array.from(times), 1)
      return fitted.ok ? 'regular' : fitted.problem.kind
    }
    expect(kind(regular())).toBe('regular')
    expect(kind(regular().with(7, 24))).toBe('duplicate')
    expect(kind(regular().with(7, 19))).toBe('descending')
    expect(kind(regular().map((t, i) => t + (i % 3 === 0 ? 2.5 : 0)))).toBe('uneven')
    expect(kind(regular().map((_, i) => i ** 1.5))).toBe('uneven')
  })
})
