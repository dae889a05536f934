import fc from 'fast-check'
import { describe, expect, test } from 'vitest'
import { bandHitAreas, moveBandByKey, moveBandTo, snapToGrid } from '../../src/plot/band-move.ts'
import { sliderKey } from '../../src/plot/slider-keys.ts'

const limits = { min: -400, max: 1000, step: 2 }
const key = (name: string, shiftKey = false) =>
  sliderKey({ key: name, shiftKey, ctrlKey: false, altKey: false, metaKey: false })!

describe('moveBandTo', () => {
  test('an edge lands on the nearest sample', () => {
    expect(moveBandTo({ from: 80, to: 140 }, 'from', 60.7, limits)).toEqual({ from: 60, to: 140 })
    expect(moveBandTo({ from: 80, to: 140 }, 'to', 161.2, limits)).toEqual({ from: 80, to: 162 })
  })

  test('an edge stops one step short of the other', () => {
    expect(moveBandTo({ from: 80, to: 140 }, 'from', 500, limits)).toEqual({ from: 138, to: 140 })
    expect(moveBandTo({ from: 80, to: 140 }, 'to', -500, limits)).toEqual({ from: 80, to: 82 })
  })

  test('the body keeps its width and stops at the limits', () => {
    expect(moveBandTo({ from: 80, to: 140 }, 'body', 5000, limits)).toEqual({ from: 940, to: 1000 })
    expect(moveBandTo({ from: 80, to: 140 }, 'body', -5000, limits)).toEqual({ from: -400, to: -340 })
  })

  test('whatever is dragged where, the band stays within its limits and no narrower than allowed', () => {
    fc.assert(
      fc.property(
        fc.constantFrom('from' as const, 'to' as const, 'body' as const),
        fc.double({ min: -1e6, max: 1e6, noNaN: true }),
        fc.integer({ min: -200, max: 499 }),
        fc.integer({ min: 1, max: 100 }),
        (part, value, start, width) => {
          const band = { from: start * 2, to: Math.min(1000, start * 2 + width * 2) }
          const moved = moveBandTo(band, part, value, limits)
          expect(moved.from).toBeGreaterThanOrEqual(-400)
          expect(moved.to).toBeLessThanOrEqual(1000)
          expect(moved.to - moved.from).toBeGreaterThanOrEqual(2)
          if (part === 'body') expect(moved.to - moved.from).toBe(band.to - band.from)
        },
      ),
    )
  })
})

describe('moveBandByKey', () => {
  test('arrows move one sample, with shift ten', () => {
    expect(moveBandByKey({ from: 80, to: 140 }, 'from', key('ArrowRight'), limits)).toEqual({ from: 82, to: 140 })
    expect(moveBandByKey({ from: 80, to: 140 }, 'to', key('ArrowLeft', true), limits)).toEqual({ from: 80, to: 120 })
    expect(moveBandByKey({ from: 80, to: 140 }, 'body', key('ArrowDown'), limits)).toEqual({ from: 78, to: 138 })
  })

  test('Home and End go to the limits', () => {
    expect(moveBandByKey({ from: 80, to: 140 }, 'from', key('Home'), limits)).toEqual({ from: -400, to: 140 })
    expect(moveBandByKey({ from: 80, to: 140 }, 'from', key('End'), limits)).toEqual({ from: 138, to: 140 })
    expect(moveBandByKey({ from: 80, to: 140 }, 'body', key('End'), limits)).toEqual({ from: 940, to: 1000 })
  })

  test('a value off the grid keeps its distance from it', () => {
    expect(moveBandByKey({ from: 81, to: 140 }, 'from', key('ArrowRight'), limits)).toEqual({ from: 83, to: 140 })
  })

  test('a thousand steps of a third gather no rounding error', () => {
    const thirds = { min: 0, max: 10_000, step: 10 / 3 }
    let band = { from: 0, to: 9000 }
    for (let i = 0; i < 1000; i++) band = moveBandByKey(band, 'from', key('ArrowRight'), thirds)
    expect(band.from).toBe(1000 * (10 / 3))
  })
})

describe('snapToGrid', () => {
  test('counts from the origin', () => {
    expect(snapToGrid(4.4, { min: 0, max: 10, step: 2, origin: 1 })).toBe(5)
  })
})

describe('bandHitAreas', () => {
  test('edges are 24 px wide and the areas join without covering each other', () => {
    fc.assert(
      fc.property(
        fc.double({ min: 0, max: 900, noNaN: true }),
        fc.double({ min: 0, max: 900, noNaN: true }),
        (a, b) => {
          const areas = bandHitAreas(a, b)
          const [first, last] = a <= b ? [areas.from, areas.to] : [areas.to, areas.from]
          expect(first[1] - first[0]).toBeCloseTo(24, 9)
          expect(last[1] - last[0]).toBeCloseTo(24, 9)
          expect(first[1]).toBe(areas.body[0])
          expect(areas.body[1]).toBe(last[0])
          expect(areas.body[1]).toBeGreaterThanOrEqual(areas.body[0] - 1e-9)
        },
      ),
    )
  })
})

describe('sliderKey', () => {
  test('leaves other keys and shortcuts to the page', () => {
    expect(sliderKey({ key: 'a', shiftKey: false, ctrlKey: false, altKey: false, metaKey: false })).toBeNull()
    expect(sliderKey({ key: 'ArrowLeft', shiftKey: false, ctrlKey: true, altKey: false, metaKey: false })).toBeNull()
    expect(key('PageUp')).toEqual({ kind: 'steps', steps: 10 })
  })
})
