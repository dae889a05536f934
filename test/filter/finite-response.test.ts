import fc from 'fast-check'
import { describe, expect, test } from 'vitest'
import { convolveTaps, support } from '../../src/filter/finite-response.ts'
import { expectClose, largest } from './expect-close.ts'

function writtenOut(x: Float64Array, taps: Float64Array): Float64Array {
  const y = new Float64Array(x.length + taps.length - 1)
  for (let i = 0; i < x.length; i++) for (let k = 0; k < taps.length; k++) y[i + k] += x[i] * taps[k]
  return y
}

const pseudoRandom = (n: number, seed: number) =>
  Float64Array.from({ length: n }, (_, i) => (((i + seed) * 7919 + ((i * i) % 1013)) % 2003) / 1001 - 1)

describe('convolveTaps', () => {
  test('is the sum written out, whatever the lengths', () => {
    fc.assert(
      fc.property(fc.integer({ min: 1, max: 700 }), fc.integer({ min: 1, max: 300 }), (n, m) => {
        const x = pseudoRandom(n, 1)
        const taps = pseudoRandom(m, 17)
        expectClose(convolveTaps(x, taps), writtenOut(x, taps), 1e-13 * Math.sqrt(n + m))
      }),
      { numRuns: 60 },
    )
  })

  test('joins many blocks without a seam', () => {
    const x = pseudoRandom(20_000, 3)
    const taps = pseudoRandom(251, 5)
    const expected = writtenOut(x, taps)
    expectClose(convolveTaps(x, taps), expected, 1e-14 * largest(expected))
  })

  test('gives exactly 0 before the first and after the last sample that is not 0, also by transforms', () => {
    const x = new Float64Array(3000)
    x.set(
      pseudoRandom(400, 2).map((v) => v + 2),
      1000,
    )
    const taps = pseudoRandom(301, 9)
    const y = convolveTaps(x, taps)
    expect(y.subarray(0, 1000).every((value) => value === 0)).toBe(true)
    expect(y.subarray(1400 + 300).every((value) => value === 0)).toBe(true)
  })

  test('keeps its own precision beside an input ten thousand times the size of the taps', () => {
    const x = pseudoRandom(4000, 4).map((v) => 2e4 + v)
    const taps = pseudoRandom(401, 5).map((v) => v / 400)
    expectClose(convolveTaps(x, taps), writtenOut(x, taps), 1e-14 * 2e4)
  })

  test('of nothing is nothing', () => {
    expect(convolveTaps(new Float64Array(0), Float64Array.of(1, 2))).toEqual(new Float64Array(0))
  })
})

test('support is the range that is not zero', () => {
  expect(support(Float64Array.of(0, 0, 3, 0, 1, 0))).toEqual({ from: 2, to: 5 })
  expect(support(new Float64Array(4))).toEqual({ from: 0, to: 0 })
})
