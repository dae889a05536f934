import fc from 'fast-check'
import { describe, expect, test } from 'vitest'
import { type LabelPlace, placeLabels, placesAlong } from '../../src/plot/place-labels.ts'

const limits = { left: 0, right: 400, top: 0, bottom: 150 }
const place = (x: number, y: number, cost = 0): LabelPlace => ({ x, y, anchor: 'start', cost })

describe('placeLabels', () => {
  test('a label stands at its cheapest place', () => {
    const [found] = placeLabels([{ width: 50, height: 15, places: [place(10, 20, 2), place(90, 60, 1)] }], { limits })
    expect(found).toMatchObject({ x: 90, y: 60, crossed: false, cost: 1 })
  })

  test('a later label makes way for an earlier one', () => {
    const wish = { width: 50, height: 15, places: [place(10, 20), place(10, 60, 1)] }
    const [first, second] = placeLabels([wish, wish], { limits })
    expect(first?.y).toBe(20)
    expect(second?.y).toBe(60)
  })

  test('a label without a free place is left out, and so is one whose place costs more than it is worth', () => {
    const wish = { width: 50, height: 15, places: [place(10, 20)] }
    expect(placeLabels([wish, wish], { limits })[1]).toBeNull()
    expect(placeLabels([wish], { limits, taken: [{ left: 0, right: 20, top: 10, bottom: 30 }] })[0]).toBeNull()
    expect(placeLabels([{ ...wish, places: [place(10, 20, 5)], maxCost: 5 }], { limits })[0]).toBeNull()
    expect(placeLabels([{ ...wish, places: [place(380, 20), place(10, 149)] }], { limits })[0]).toBeNull()
  })

  test('a label goes round a curve if that is worth it, and says when a curve runs through it', () => {
    const heights = new Float64Array(401).fill(20)
    const wish = { width: 50, height: 15, places: [place(10, 20), place(10, 60, 1)] }
    expect(placeLabels([wish], { limits, courses: [{ heights, weight: 4 }] })[0]).toMatchObject({
      y: 60,
      crossed: false,
    })
    expect(placeLabels([wish], { limits, courses: [{ heights, weight: 0.2 }] })[0]).toMatchObject({
      y: 20,
      crossed: true,
    })
  })

  test('a curve that falls steeply between two columns is met at every height of the fall', () => {
    const heights = Float64Array.from({ length: 401 }, (_, i) => (i < 30 ? 0 : 150))
    const wish = { width: 50, height: 15, places: [place(10, 75)] }
    expect(placeLabels([wish], { limits, courses: [{ heights, weight: 1 }] })[0]?.crossed).toBe(true)
  })

  test('a curve that is not there is in nobody’s way', () => {
    const heights = new Float64Array(401).fill(Number.NaN)
    const wish = { width: 50, height: 15, places: [place(10, 75)] }
    expect(placeLabels([wish], { limits, courses: [{ heights, weight: 1 }] })[0]?.crossed).toBe(false)
  })

  test('no label touches another, a mark or the edge, whatever is wished for', () => {
    const spot = fc.record({
      x: fc.double({ min: -50, max: 450, noNaN: true }),
      y: fc.double({ min: -50, max: 200, noNaN: true }),
      anchor: fc.constantFrom('start' as const, 'middle' as const, 'end' as const),
      cost: fc.double({ min: 0, max: 9, noNaN: true }),
    })
    const wish = fc.record({
      width: fc.integer({ min: 5, max: 120 }),
      height: fc.constant(15),
      places: fc.array(spot, { maxLength: 12 }),
    })
    const taken = [{ left: 195, right: 205, top: 70, bottom: 80 }]
    fc.assert(
      fc.property(fc.array(wish, { maxLength: 12 }), (wishes) => {
        const boxes = placeLabels(wishes, { limits, taken }).flatMap((found) => (found ? [found.box] : []))
        for (const [i, a] of boxes.entries()) {
          expect(a.left >= 0 && a.right <= 400 && a.top >= 0 && a.bottom <= 150).toBe(true)
          for (const b of [...boxes.slice(i + 1), ...taken]) {
            expect(a.right <= b.left || b.right <= a.left || a.bottom <= b.top || b.bottom <= a.top).toBe(true)
          }
        }
      }),
      { numRuns: 300 },
    )
  })

  test('a size that is no number is refused with its value', () => {
    expect(() => placeLabels([{ width: Number.NaN, height: 15, places: [] }], { limits })).toThrow(
      'wishes[0] must have a finite size, has NaN × 15',
    )
  })
})

describe('placesAlong', () => {
  const size = { width: 40, height: 15 }

  test('places lie above and below a flat curve, close by, within its length', () => {
    const places = placesAlong(new Float64Array(201).fill(50), size, 10, () => 0)
    expect(new Set(places.map(({ y }) => y))).toEqual(new Set([50 - 10.5, 50 + 10.5]))
    expect(Math.min(...places.map(({ x }) => x)) - 20).toBeGreaterThanOrEqual(10)
    expect(Math.max(...places.map(({ x }) => x)) + 20).toBeLessThanOrEqual(210)
    expect(places.every(({ cost }) => cost === 0)).toBe(true)
  })

  test('above a slope a label clears its highest point under the label', () => {
    const slope = Float64Array.from({ length: 201 }, (_, i) => 150 - i / 2)
    for (const { x, y } of placesAlong(slope, size, 0, () => 0)) {
      const under = slope.subarray(x - 20, x + 21)
      expect(y + 7.5 <= Math.min(...under) || y - 7.5 >= Math.max(...under) - 2).toBe(true)
    }
  })
})
