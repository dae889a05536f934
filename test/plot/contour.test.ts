import fc from 'fast-check'
import { describe, expect, test } from 'vitest'
import { contourPath } from '../../src/plot/index.ts'

const same = (value: number) => value

/** Corners of a path in grid places. */
const cornersOf = (path: string) =>
  [...path.matchAll(/(-?[\d.]+),(-?[\d.]+)/g)].map(([, x, y]) => [Number(x), Number(y)] as const)

/** Even–odd rule. */
function inside(path: string, x: number, y: number): boolean {
  let odd = false
  for (const ring of path.split('Z').filter(Boolean)) {
    const corners = cornersOf(ring)
    corners.forEach(([x1, y1], i) => {
      const [x2, y2] = corners[(i + 1) % corners.length]
      if (y1 > y !== y2 > y && x < x1 + ((y - y1) / (y2 - y1)) * (x2 - x1)) odd = !odd
    })
  }
  return odd
}

describe('contourPath(…)', () => {
  test('is empty where no value reaches the threshold', () => {
    expect(contourPath([1, 2, 3, 4], 2, 2, 5, same, same)).toBe('')
    expect(contourPath([Number.NaN, Number.NaN], 2, 1, 0, same, same)).toBe('')
  })

  test('lies between two cells where the value between their middles is the threshold', () => {
    // along the row: 0 at 0.5, 1 at 1.5, 2 at 2.5, and so 1.25 at 1.75
    const corners = cornersOf(contourPath([0, 1, 2, 0, 1, 2, 0, 1, 2], 3, 3, 1.25, same, same))
    expect(Math.min(...corners.map(([x]) => x))).toBeCloseTo(1.75, 2)
    expect(Math.max(...corners.map(([x]) => x))).toBeCloseTo(3, 2)
  })

  test('holds the middle of every cell that reaches the threshold and of no other', () => {
    const value = fc.oneof(fc.double({ min: -3, max: 3, noNaN: true }), fc.constant(Number.NaN))
    fc.assert(
      fc.property(
        fc.integer({ min: 1, max: 7 }),
        fc.integer({ min: 1, max: 5 }),
        fc.infiniteStream(value),
        (m, n, stream) => {
          const values = [...stream.take(m * n)]
          const path = contourPath(values, m, n, 0, same, same)
          values.forEach((of, i) => {
            // a hundredth of a pixel is what a path keeps
            if (Math.abs(of) < 0.05) return
            expect(inside(path, (i % m) + 0.5, Math.floor(i / m) + 0.5)).toBe(of > 0)
          })
        },
      ),
      { numRuns: 100 },
    )
  })

  test('goes through the scales of its axes', () => {
    const path = contourPath(
      [1],
      1,
      1,
      0,
      (x) => 100 + 50 * x,
      (y) => 80 - 20 * y,
    )
    const corners = cornersOf(path)
    expect(Math.min(...corners.map(([x]) => x))).toBeGreaterThanOrEqual(100)
    expect(Math.max(...corners.map(([x]) => x))).toBeLessThanOrEqual(150)
    expect(Math.max(...corners.map(([, y]) => y))).toBeLessThanOrEqual(80)
  })

  test('refuses values that do not fill the grid', () => {
    expect(() => contourPath([1, 2, 3], 2, 2, 0, same, same)).toThrow(/values must fill 2 × 2 cells, were 3/)
  })
})
