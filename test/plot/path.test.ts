import fc from 'fast-check'
import { describe, expect, test } from 'vitest'
import { areaPath, linePath, stepPath } from '../../src/plot/path.ts'
import { linearScale, logScale } from '../../src/plot/scale.ts'

const pixelX = linearScale([0, 10], [0, 100])
const pixelY = linearScale([0, 10], [100, 0])

/** The points of a path of M and L commands, one list per subpath. */
function points(d: string): [number, number][][] {
  return d
    .split('M')
    .slice(1)
    .map((sub) =>
      sub
        .replace(/h0|Z/g, '')
        .split('L')
        .map((p) => p.split(',').map(Number) as [number, number]),
    )
}

describe('linePath', () => {
  test('goes through all samples where there is room', () => {
    expect(linePath([0, 5, 10], [0, 10, 2.5], pixelX, pixelY)).toBe('M0,100L50,0L100,75')
  })

  test('takes regular positions as start and step', () => {
    expect(linePath({ start: 0, step: 5 }, Float64Array.of(0, 10, 2.5), pixelX, pixelY)).toBe('M0,100L50,0L100,75')
  })

  test('rounds to a hundredth of a pixel', () => {
    expect(linePath([1 / 3, 2], [1 / 3, 2], pixelX, pixelY)).toBe('M3.33,96.67L20,80')
  })

  test('breaks at NaN and at infinities and draws nothing across', () => {
    const d = linePath([0, 1, 2, 3, 4, 5, 6], [1, 2, Number.NaN, 3, 4, Number.POSITIVE_INFINITY, 5], pixelX, pixelY)
    expect(d).toBe('M0,90L10,80M30,70L40,60M60,50h0')
  })

  test('breaks where a logarithmic scale has no place', () => {
    const log = logScale([0.1, 10], [100, 0])
    expect(linePath([0, 1, 2], [1, 0, 10], pixelX, log)).toBe('M0,50h0M20,0h0')
    expect(linePath([0, 1, 10], [1, 2, 3], logScale([1, 10], [0, 100]), pixelY)).toBe('M0,80L100,70')
  })

  test('nothing gives an empty path', () => {
    expect(linePath([], [], pixelX, pixelY)).toBe('')
    expect(linePath([1, 2], [Number.NaN, Number.NaN], pixelX, pixelY)).toBe('')
  })

  test('leaves out samples outside the domain of x but for one neighbour on each side', () => {
    const d = linePath({ start: -30, step: 10 }, new Float64Array(8).fill(5), linearScale([-5, 15], [0, 200]), pixelY)
    expect(d).toBe('M-50,50L50,50L150,50L250,50')
  })

  test('lengths that differ and steps that do not rise are refused', () => {
    expect(() => linePath([1, 2], [1], pixelX, pixelY)).toThrow(/xs must have as many samples as ys \(1\), has 2/)
    expect(() => linePath({ start: 0, step: 0 }, [1], pixelX, pixelY)).toThrow(/step must lie above 0, was 0/)
  })

  const series = fc.record({
    ys: fc.array(
      fc.oneof({ weight: 20, arbitrary: fc.double({ min: -5, max: 15, noNaN: true }) }, fc.constant(Number.NaN)),
      {
        minLength: 1,
        maxLength: 3000,
        size: 'max',
      },
    ),
    columns: fc.integer({ min: 3, max: 300 }),
    log: fc.boolean(),
  })

  test('decimation keeps the lowest and the highest sample of every column', () => {
    fc.assert(
      fc.property(series, ({ ys, columns, log }) => {
        const n = ys.length
        const x = log ? logScale([1, n + 1], [0, columns]) : linearScale([1, n + 1], [0, columns])
        const xs = Float64Array.from(ys, (_, i) => i + 1)
        const drawn = points(linePath(xs, ys, x, pixelY)).flat()
        const lowest = new Map<number, number>()
        const highest = new Map<number, number>()
        ys.forEach((v, i) => {
          if (Number.isNaN(v)) return
          const column = Math.floor(x.toPixel(xs[i]))
          const px = Math.round(pixelY.toPixel(v) * 100) / 100
          lowest.set(column, Math.max(lowest.get(column) ?? -1e9, px))
          highest.set(column, Math.min(highest.get(column) ?? 1e9, px))
        })
        const has = (column: number, px: number) =>
          drawn.some(([dx, dy]) => dy === px && dx >= column - 0.01 && dx <= column + 1.01)
        for (const [column, px] of lowest) expect(has(column, px)).toBe(true)
        for (const [column, px] of highest) expect(has(column, px)).toBe(true)
      }),
      { numRuns: 40 },
    )
  })

  test('an unbroken path has at most about two points a column, in the order of x, all of them samples', () => {
    fc.assert(
      fc.property(series, ({ ys, columns }) => {
        const whole = ys.map((v) => (Number.isNaN(v) ? 0 : v))
        const x = linearScale([0, whole.length], [0, columns])
        const drawn = points(linePath({ start: 0, step: 1 }, whole, x, pixelY)).flat()
        expect(drawn.length).toBeLessThanOrEqual(2 * columns + 2)
        const samples = new Set(
          whole.map((v, i) => `${Math.round(x.toPixel(i) * 100) / 100},${Math.round(pixelY.toPixel(v) * 100) / 100}`),
        )
        drawn.forEach((p, i) => {
          expect(samples.has(`${p[0]},${p[1]}`)).toBe(true)
          if (i > 0) expect(p[0]).toBeGreaterThanOrEqual(drawn[i - 1][0])
        })
      }),
      { numRuns: 40 },
    )
  })

  test('one sample of 100 000 that stands out is drawn', () => {
    const ys = new Float64Array(100_000)
    ys[73_211] = 9
    const d = linePath({ start: 0, step: 1 }, ys, linearScale([0, 99_999], [0, 800]), pixelY)
    expect(
      points(d)
        .flat()
        .filter(([, y]) => y === 10),
    ).toHaveLength(1)
    expect(points(d).flat().length).toBeLessThanOrEqual(1602)
  })

  test('1500 samples take well under a frame', () => {
    const ys = Float64Array.from({ length: 1500 }, (_, i) => 5 + 4 * Math.sin(i / 40))
    const x = linearScale([0, 1499], [0, 864])
    for (let i = 0; i < 200; i++) linePath({ start: 0, step: 1 }, ys, x, pixelY)
    const times = Array.from({ length: 51 }, () => {
      const begin = performance.now()
      linePath({ start: 0, step: 1 }, ys, x, pixelY)
      return performance.now() - begin
    }).sort((a, b) => a - b)
    // aim: 1 ms; the bound allows for other work on the same machine
    expect(times[25]).toBeLessThan(4)
  })
})

describe('areaPath', () => {
  test('closes along zero', () => {
    expect(areaPath([0, 5, 10], [0, 10, 2.5], pixelX, pixelY)).toBe('M0,100L0,100L50,0L100,75L100,100Z')
  })

  test('closes along another level, in separate pieces round a gap', () => {
    expect(areaPath([0, 1, 2, 3], [1, Number.NaN, 2, 3], pixelX, pixelY, 5)).toBe(
      'M0,50L0,90L0,50ZM20,50L20,80L30,70L30,50Z',
    )
  })

  test('closes along a second curve, and breaks where either has a gap', () => {
    expect(areaPath([0, 5, 10], [1, 2, 3], pixelX, pixelY, [4, 5, 6])).toBe('M0,90L50,80L100,70L100,40L50,50L0,60Z')
    expect(areaPath([0, 5, 10], [1, 2, Number.NaN], pixelX, pixelY, [Number.NaN, 5, 6])).toBe('M50,80h0L50,50Z')
  })

  test('a level without a place is refused', () => {
    expect(() => areaPath([0, 1], [1, 2], pixelX, logScale([0.1, 10], [100, 0]))).toThrow(
      /base must have a place on the y scale, was 0/,
    )
  })
})

describe('stepPath', () => {
  test('a box rises from the level and returns to it', () => {
    expect(stepPath([2, 4], [5], pixelX, pixelY)).toBe('M20,100V50H40V100')
  })

  test('steps share their edges and a gap returns to the level', () => {
    expect(stepPath([0, 1, 2], [5, 8], pixelX, pixelY)).toBe('M0,100V50H10V20H20V100')
    expect(stepPath([0, 1, 2, 3], [5, Number.NaN, 8], pixelX, pixelY)).toBe('M0,100V50H10V100M20,100V20H30V100')
  })

  test('edges not one more than values are refused', () => {
    expect(() => stepPath([0, 1], [1, 2], pixelX, pixelY)).toThrow(/edges must be one more than values \(2\), were 2/)
  })
})
