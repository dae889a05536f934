import fc from 'fast-check'
import { describe, expect, test } from 'vitest'
import type { TradeOffLimits } from '../../../src/evidence/trade-off-answer.ts'
import type { CellFigures } from '../../../src/evidence/trade-off-figures.ts'
import { limitedMap, placedLimits, unlinedWords } from '../../../src/page/desks/trade-off/limit-lines.ts'
import { verdictOnLimits } from '../../../src/state/map-figures.ts'
import { textWidth } from '../../../src/plot/index.ts'

const cell = (change: Partial<CellFigures>): CellFigures => ({
  ...{ index: 0, cutoffIndex: 0, rollOffIndex: 0, cutoffHz: 0.15, rollOff: 2, error: null },
  ...{ bias: -0.12, noise: 0.71, totalError: 0.72, precisionFactor: 1.3, equalTrialsFactor: 1.2 },
  ...{ latencyShiftMs: null, missingShare: 0 },
  ...change,
})

const size = fc.oneof(fc.constant(null), fc.double({ min: 0, max: 2, noNaN: true }))
const cells = fc.array(
  fc.record({ bias: size, noise: size, totalError: size, error: fc.constantFrom(null, null, null, 'too wide') }),
  { minLength: 40, maxLength: 40 },
)
const limit = fc.option(fc.double({ min: 0.01, max: 2, noNaN: true }), { nil: undefined })
const limits = fc
  .record({ bias: limit, noise: limit, totalError: limit })
  .map((of) => Object.fromEntries(Object.entries(of).filter(([, value]) => value !== undefined)) as TradeOffLimits)

const frame = (width: number, height: number) => ({
  ...{ id: 'f', width: width + 20, height: height + 20, left: 10, top: 10, right: 10 + width, bottom: 10 + height },
  ...{ plotWidth: width, plotHeight: height },
})

describe('a map with limits', () => {
  test('has the middle of a cell in its region exactly where the verdict on the filter is that it keeps them', () => {
    fc.assert(
      fc.property(cells, limits, (of, asked) => {
        const map = limitedMap(of.map(cell), asked, 10, 4)
        expect(map.region === null).toBe(Object.keys(asked).length === 0)
        const { region } = map
        if (!region) return
        of.forEach((change, i) => {
          const middle = (i % 10) + 0.5
          const held = region[Math.floor(i / 10)].some(({ from, to }) => middle > from && middle < to)
          // on the limit the middle is the very end of the run
          const { kept, tightest } = verdictOnLimits(cell(change), asked)
          if (Math.abs((tightest?.multiples ?? 2) - 1) > 1e-6) expect(held).toBe(kept)
        })
      }),
    )
  })

  test('has no line for a limit that all or no filters keep, and says so', () => {
    const map = limitedMap([cell({}), cell({ bias: 0.1 })], { bias: 0.2, noise: 0.5, totalError: 0.72 }, 2, 1)
    expect(map.limits.map(({ lines, kept }) => [lines.length, kept])).toEqual([
      [0, 'all'],
      [0, 'none'],
      [0, 'all'],
    ])
    expect(unlinedWords(map, 'µV')).toBe(
      'Without a line: bias 0.2 µV and total error 0.72 µV (every filter of the map keeps them) and noise 0.5 µV (no filter of the map keeps it).',
    )
    expect(unlinedWords(limitedMap([cell({}), cell({ bias: 1 })], { bias: 0.2 }, 2, 1), 'µV')).toBe('')
  })

  test('draws a hair over the limit, which the verdict lets pass, as kept', () => {
    const map = limitedMap([cell({ bias: 0.1 + 0.2 })], { bias: 0.3 }, 1, 1)
    expect(map.limits[0].kept).toBe('all')
  })
})

describe('names at the lines', () => {
  test('never touch one another nor leave the map', () => {
    fc.assert(
      fc.property(
        cells,
        limits,
        fc.integer({ min: 60, max: 900 }),
        fc.integer({ min: 16, max: 40 }),
        (of, asked, width, rowHeight) => {
          const map = limitedMap(of.map(cell), asked, 10, 4)
          const room = frame(width, 4 * rowHeight)
          const placed = placedLimits(map, room, 10, 4, 'µV', [3, 4, 5], 12)
          const boxes = placed.map(({ x, y, anchor, width: w, height: h }) => ({
            ...{ left: anchor === 'start' ? x : x - w, right: anchor === 'start' ? x + w : x },
            ...{ top: y - h / 2, bottom: y + h / 2 },
          }))
          boxes.forEach((a, i) => {
            expect(a.left).toBeGreaterThanOrEqual(room.left)
            expect(a.right).toBeLessThanOrEqual(room.right)
            expect(a.top).toBeGreaterThanOrEqual(room.top)
            expect(a.bottom).toBeLessThanOrEqual(room.bottom)
            expect(a.right - a.left).toBeGreaterThan(textWidth(placed[i].text))
            for (const b of boxes.slice(0, i))
              expect(a.left >= b.right || b.left >= a.right || a.top >= b.bottom || b.top >= a.bottom).toBe(true)
          })
        },
      ),
    )
  })

  test('of one limit stands beside its line, on the side that keeps it', () => {
    const biases = [0.1, 0.1, 0.1, 0.1, 0.1, 0.4, 0.4, 0.4, 0.4, 0.4]
    const of = biases.map((bias) => cell({ bias }))
    const map = limitedMap(of, { bias: 0.2 }, 10, 1)
    const [name, ...others] = placedLimits(map, frame(600, 25), 10, 1, 'µV', [], null)
    expect(others).toEqual([])
    expect(name).toMatchObject({ text: 'bias 0.2 µV', anchor: 'end' })
    // halfway in log size from the middle of the fifth cell to the sixth's
    expect(name.x).toBeCloseTo(10 + 300 - 2, 6)
  })

  test('makes room for the cursor', () => {
    const of = Array.from({ length: 20 }, (_, i) => cell({ bias: i % 10 < 5 ? 0.1 : 0.4 }))
    const map = limitedMap(of, { bias: 0.2 }, 10, 2)
    const rowOf = (cursor: number | null) => placedLimits(map, frame(600, 50), 10, 2, 'µV', [], cursor)[0].y
    expect(rowOf(null)).toBe(22.5)
    expect(rowOf(14)).toBe(47.5)
    expect(rowOf(4)).toBe(22.5)
  })

  test('of two limits whose lines run side by side stand in different places', () => {
    const of = Array.from({ length: 40 }, (_, i) => cell({ bias: i % 10 < 5 ? 0.1 : 0.4, noise: i % 10 < 5 ? 2 : 0.5 }))
    const map = limitedMap(of, { bias: 0.2, noise: 1 }, 10, 4)
    const placed = placedLimits(map, frame(400, 100), 10, 4, 'µV', [], null)
    expect(placed.map(({ limit: name }) => name).sort()).toEqual(['bias', 'noise'])
    expect(placed.map(({ anchor }) => anchor).sort()).toEqual(['end', 'start'])
  })
})
