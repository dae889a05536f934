import fc from 'fast-check'
import { describe, expect, test } from 'vitest'
import { paretoFront } from '../../src/evidence/pareto-front.ts'

describe('paretoFront', () => {
  test('of four points written out by hand', () => {
    const points = [
      { bias: -1, noise: 5 },
      { bias: 2, noise: 3 },
      { bias: 2, noise: 4 },
      { bias: -3, noise: 3 },
      { bias: 0.5, noise: null },
    ]
    expect(paretoFront(points)).toEqual([0, 1])
  })

  test('is what comparing every pair gives, ties and missing figures included', () => {
    const figure = fc.option(fc.oneof(fc.integer({ min: -4, max: 4 }), fc.double({ min: -3, max: 3, noNaN: true })))
    fc.assert(
      fc.property(
        fc.array(fc.record({ bias: figure, noise: figure.map((v) => (v === null ? null : Math.abs(v))) })),
        (points) => {
          const beats = (a: (typeof points)[0], b: (typeof points)[0]) => {
            if (a.bias === null || a.noise === null || b.bias === null || b.noise === null) return false
            const [x, y] = [Math.abs(a.bias), Math.abs(b.bias)]
            return x <= y && a.noise <= b.noise && (x < y || a.noise < b.noise)
          }
          const expected = points.flatMap((point, i) =>
            point.bias !== null && point.noise !== null && !points.some((other) => beats(other, point)) ? [i] : [],
          )
          expect(paretoFront(points).sort((a, b) => a - b)).toEqual(expected)
        },
      ),
      { numRuns: 400 },
    )
  })
})
