import fc from 'fast-check'
import { describe, expect, test } from 'vitest'
import { logCutoffs } from '../../../src/evidence/trade-off-candidate.ts'
import type { CellFigures } from '../../../src/evidence/trade-off-figures.ts'
import { spread } from '../../../src/page/desks/trade-off/cut-figure.tsx'
import { cutoffScale, movedCell, shadeOf } from '../../../src/page/desks/trade-off/map-shape.ts'
import { cellWords, limitWords } from '../../../src/page/desks/trade-off/map-words.ts'
import { rollOffProblem } from '../../../src/page/editors/trade-off-editors.tsx'

const cell = (change: Partial<CellFigures>): CellFigures => ({
  ...{ index: 0, cutoffIndex: 0, rollOffIndex: 0, cutoffHz: 0.15, rollOff: 2, error: null },
  ...{ bias: -0.12, noise: 0.71, totalError: 0.72, precisionFactor: 1.3, equalTrialsFactor: 1.2 },
  ...{ latencyShiftMs: null, missingShare: 0 },
  ...change,
})

const candidate = { design: 'butterworth', pass: 'high', meaning: 'half-amplitude', direction: 'both' } as const

describe('the cursor of the map', () => {
  test('goes a cell by an arrow key, five with shift, and never leaves the map', () => {
    expect(movedCell(0, 'ArrowRight', 60, 8, false)).toBe(1)
    expect(movedCell(0, 'ArrowUp', 60, 8, false)).toBe(60)
    expect(movedCell(61, 'ArrowDown', 60, 8, false)).toBe(1)
    expect(movedCell(0, 'ArrowRight', 60, 8, true)).toBe(5)
    expect(movedCell(70, 'End', 60, 8, false)).toBe(119)
    expect(movedCell(70, 'Home', 60, 8, false)).toBe(60)
    expect(movedCell(70, 'a', 60, 8, false)).toBeNull()
    const key = fc.constantFrom('ArrowLeft', 'ArrowRight', 'ArrowUp', 'ArrowDown', 'Home', 'End')
    fc.assert(
      fc.property(fc.integer({ min: 0, max: 479 }), key, fc.boolean(), (index, pressed, far) => {
        const next = movedCell(index, pressed, 60, 8, far) as number
        expect(next).toBeGreaterThanOrEqual(0)
        expect(next).toBeLessThan(480)
      }),
    )
  })
})

describe('the cutoff axis', () => {
  test('puts every cutoff into the middle of its column, to a tenth of the column', () => {
    const cutoffs = logCutoffs(0.01, 3, 60)
    const scale = cutoffScale(cutoffs, 0, 600)
    cutoffs.forEach((hz, i) => expect(Math.abs(scale.toPixel(hz) - (10 * i + 5))).toBeLessThan(1))
  })
})

describe('shades', () => {
  test('a bias begins at 0 and goes by its size, a noise spans what the map has', () => {
    const cells = [cell({ bias: -0.4, noise: 0.5 }), cell({ bias: 0.1, noise: 1 }), null, cell({ bias: null })]
    expect(shadeOf(cells, 'bias').range).toEqual([0, 0.4])
    expect(shadeOf(cells, 'bias').of(cells[0])).toBe(1)
    expect(shadeOf(cells, 'bias').of(cells[1])).toBe(0.5)
    expect(shadeOf(cells, 'bias').of(cells[3])).toBeNull()
    expect(shadeOf(cells, 'noise').range).toEqual([0.5, 1])
    expect(shadeOf([null], 'noise').range).toBeNull()
  })
})

describe('words of a cell', () => {
  test('name filter, figures and verdict, with the error of what was simulated', () => {
    expect(cellWords(cell({}), candidate, { bias: 0.2 }, 'µV', null)).toBe(
      '0.15 Hz, order 2: bias −0.120 µV, noise 0.710 µV, total error 0.720 µV, precision factor 1.30, equal-trials factor 1.20; keeps the limits',
    )
    expect(cellWords(cell({}), candidate, { bias: 0.1 }, 'µV', 0.012)).toContain('noise 0.710 ± 0.01 µV')
    expect(cellWords(cell({}), candidate, { bias: 0.1 }, 'µV', 0.012)).toContain('over a limit')
    expect(cellWords(cell({ error: 'cutoffsHz[0] must lie below 125, was 200' }), candidate, {}, 'µV', null)).toBe(
      '0.15 Hz, order 2: cannot be used. The cutoff must lie below 125, was 200',
    )
    expect(cellWords(cell({ equalTrialsFactor: 1e-8 }), candidate, {}, 'µV', null)).toContain('factor below 0.001')
    expect(cellWords(null, candidate, {}, 'µV', null)).toBe('not computed yet')
  })

  test('limits are said with their units', () => {
    expect(limitWords({ bias: 0.2, latencyShiftMs: 10 }, 'µV')).toBe(
      'bias within 0.2 µV and latency shift within 10 ms',
    )
    expect(limitWords({}, 'µV')).toBe('no limit')
  })
})

describe('labels of the cut', () => {
  test('keep 16 px apart, their order, and the room they have', () => {
    fc.assert(
      fc.property(fc.array(fc.double({ min: 0, max: 150, noNaN: true }), { minLength: 1, maxLength: 4 }), (heights) => {
        const placed = spread(heights, 8, 150)
        const order = heights.map((_, i) => i).sort((a, b) => heights[a] - heights[b] || a - b)
        order.forEach((i, k) => {
          expect(placed[i]).toBeLessThanOrEqual(150)
          if (k > 0) expect(placed[i] - placed[order[k - 1]]).toBeGreaterThanOrEqual(16 - 1e-9)
        })
      }),
    )
  })
})

describe('roll-offs that are typed', () => {
  test('orders are whole numbers above 0, at most twelve', () => {
    expect(rollOffProblem([1, 2, 4], true)).toBeNull()
    expect(rollOffProblem([1.5], true)).toBe('orders are whole numbers')
    expect(rollOffProblem([1.5], false)).toBeNull()
    expect(rollOffProblem([Number.NaN], false)).toBe('numbers above 0, separated by spaces')
    expect(rollOffProblem([], true)).toBe('write at least one number')
    expect(rollOffProblem(new Array(13).fill(1), true)).toBe('at most 12 roll-offs')
  })
})
