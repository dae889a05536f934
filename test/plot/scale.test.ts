import fc from 'fast-check'
import { describe, expect, test } from 'vitest'
import { clampToDomain, compressedScale, linearScale, logScale } from '../../src/plot/scale.ts'
import type { Scale } from '../../src/plot/scale.ts'

const bounds = fc.tuple(
  fc.double({ min: -1000, max: 1000, noNaN: true }),
  fc.double({ min: 0.01, max: 2000, noNaN: true }),
)
const anyScale: fc.Arbitrary<Scale> = fc
  .record({
    kind: fc.constantFrom('linear', 'log', 'compressed'),
    bounds,
    range: fc.tuple(fc.double({ min: -50, max: 500, noNaN: true }), fc.double({ min: 20, max: 2000, noNaN: true })),
    width: fc.double({ min: 0.001, max: 100, noNaN: true }),
    flipDomain: fc.boolean(),
    flipRange: fc.boolean(),
  })
  .map(({ kind, bounds: [low, extent], range: [start, length], width, flipDomain, flipRange }) => {
    const from = kind === 'log' ? Math.abs(low) + 0.001 : low
    const domain: [number, number] = flipDomain ? [from + extent, from] : [from, from + extent]
    const range: [number, number] = flipRange ? [start + length, start] : [start, start + length]
    if (kind === 'linear') return linearScale(domain, range)
    return kind === 'log' ? logScale(domain, range) : compressedScale(domain, range, width)
  })
const fraction = fc.double({ min: 0, max: 1, noNaN: true })
const along = ([a, b]: readonly [number, number], t: number) => a + (b - a) * t

describe('scales', () => {
  test('every kind takes the ends of its domain to the ends of its range', () => {
    fc.assert(
      fc.property(anyScale, (scale) => {
        expect(scale.toPixel(scale.domain[0])).toBeCloseTo(scale.range[0], 9)
        expect(scale.toPixel(scale.domain[1])).toBeCloseTo(scale.range[1], 9)
      }),
    )
  })

  test('fromPixel undoes toPixel', () => {
    fc.assert(
      fc.property(anyScale, fraction, (scale, t) => {
        const value = along(scale.domain, t)
        const extent = Math.max(Math.abs(scale.domain[0]), Math.abs(scale.domain[1]))
        expect(Math.abs(scale.fromPixel(scale.toPixel(value)) - value)).toBeLessThanOrEqual(1e-9 * extent)
      }),
    )
  })

  test('toPixel undoes fromPixel', () => {
    fc.assert(
      fc.property(anyScale, fraction, (scale, t) => {
        const pixel = along(scale.range, t)
        expect(Math.abs(scale.toPixel(scale.fromPixel(pixel)) - pixel)).toBeLessThanOrEqual(1e-6)
      }),
    )
  })

  test('pixels keep the order of values, or turn it round throughout', () => {
    fc.assert(
      fc.property(anyScale, fraction, fraction, (scale, s, t) => {
        const [a, b] = [along(scale.domain, Math.min(s, t)), along(scale.domain, Math.max(s, t))]
        const rise = Math.sign(scale.range[1] - scale.range[0]) * (scale.toPixel(b) - scale.toPixel(a))
        expect(rise).toBeGreaterThanOrEqual(-1e-9)
      }),
    )
  })

  test('exact cases: the middle of a linear, a logarithmic and a compressed scale', () => {
    expect(linearScale([-10, 10], [200, 0]).toPixel(0)).toBe(100)
    expect(logScale([0.01, 100], [0, 400]).toPixel(1)).toBeCloseTo(200, 12)
    expect(logScale([0.01, 100], [0, 400]).toPixel(10)).toBeCloseTo(300, 12)
    expect(compressedScale([-4, 4], [0, 100], 0.5).toPixel(0)).toBeCloseTo(50, 12)
  })

  test('negative up: the reversed range mirrors every pixel', () => {
    const up = linearScale([-3, 9], [300, 20])
    const down = linearScale([-3, 9], [20, 300])
    for (const v of [-3, -1, 0, 4.5, 9]) expect(up.toPixel(v) + down.toPixel(v)).toBeCloseTo(320, 10)
  })

  test('a compressed scale is straight near zero and grows by equal pixels per factor far from it', () => {
    const s = compressedScale([-100, 100], [0, 1000], 0.1)
    const near = s.toPixel(0.001) - s.toPixel(0)
    expect(s.toPixel(0.002) - s.toPixel(0.001)).toBeCloseTo(near, 3)
    expect(s.toPixel(100) - s.toPixel(50)).toBeCloseTo(s.toPixel(20) - s.toPixel(10), 1)
    expect(s.toPixel(0) - s.toPixel(-3)).toBeCloseTo(s.toPixel(3) - s.toPixel(0), 9)
  })

  test('what has no place has no finite pixel', () => {
    const log = logScale([0.1, 10], [0, 100])
    expect(log.toPixel(0)).toBe(Number.NEGATIVE_INFINITY)
    expect(log.toPixel(-1)).toBeNaN()
    expect(linearScale([0, 1], [0, 1]).toPixel(Number.NaN)).toBeNaN()
  })

  test('clampToDomain moves outliers to the nearest end, whichever way the domain runs', () => {
    expect(clampToDomain(linearScale([5, 1], [0, 9]), 7)).toBe(5)
    expect(clampToDomain(linearScale([1, 5], [0, 9]), 0)).toBe(1)
    expect(clampToDomain(linearScale([1, 5], [0, 9]), 3)).toBe(3)
  })

  test('scales cannot be changed', () => {
    const s = linearScale([0, 1], [0, 10])
    expect(Object.isFrozen(s) && Object.isFrozen(s.domain) && Object.isFrozen(s.range)).toBe(true)
  })

  test('a bad domain, range or width is refused with rule and value', () => {
    expect(() => linearScale([1, 1], [0, 10])).toThrow(
      new RangeError('domain must be two different finite numbers, was 1 to 1'),
    )
    expect(() => linearScale([0, 1], [Number.NaN, 10])).toThrow(
      /range must be two different finite numbers, was NaN to 10/,
    )
    expect(() => logScale([0, 10], [0, 10])).toThrow(/must lie above 0, was 0 to 10/)
    expect(() => compressedScale([-1, 1], [0, 10], 0)).toThrow(/linearWidth must be a finite number above 0, was 0/)
    expect(() => logScale([1, 1 + 1e-17], [0, 10])).toThrow(RangeError)
  })
})
