import fc from 'fast-check'
import { describe, expect, test } from 'vitest'
import { logCutoffs } from '../../../src/evidence/trade-off-candidate.ts'
import type { CellFigures } from '../../../src/evidence/trade-off-figures.ts'
import { type Frame, linearScale } from '../../../src/plot/index.ts'
import { startWorkspace } from '../../../src/state/workspace.ts'
import { cutLabels } from '../../../src/page/desks/trade-off/cut-figure.tsx'
import { cutoffScale, movedCell, shadeOf } from '../../../src/page/desks/trade-off/map-shape.ts'
import { cellWords, limitWords, placeWords } from '../../../src/page/desks/trade-off/map-words.ts'
import { rangeProblem, rollOffProblem } from '../../../src/page/editors/trade-off-editors.tsx'

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
  const frame = { left: 40, right: 640, top: 10, bottom: 150, plotWidth: 600, plotHeight: 140 } as Frame
  const hz = logCutoffs(0.01, 3, 60)

  test('stand apart from one another, inside the figure, for any curves and cursor', () => {
    fc.assert(
      fc.property(
        fc.array(fc.double({ min: 0, max: 5, noNaN: true }), { minLength: 3, maxLength: 3 }),
        fc.double({ min: -1, max: 1, noNaN: true }),
        fc.integer({ min: 0, max: 59 }),
        (levels, slope, column) => {
          const curves = ['bias', 'noise', 'total error'].map((name, i) => ({
            ...{ name, tone: 'after' as const, limit: i === 0 ? 0.2 : undefined },
            values: hz.map((_, k) => Math.max(0, levels[i] + (slope * k) / 20)),
          }))
          const scales = { frame, x: cutoffScale(hz, 40, 640), y: linearScale([0, 8], [150, 10]) }
          const labels = cutLabels(curves, column, hz, scales)
          expect(labels.length).toBeGreaterThanOrEqual(2)
          labels.forEach(({ box }, i) => {
            expect(box.left).toBeGreaterThanOrEqual(40)
            expect(box.right).toBeLessThanOrEqual(640)
            for (const { box: other } of labels.slice(0, i))
              expect(
                box.left >= other.right ||
                  other.left >= box.right ||
                  box.top >= other.bottom ||
                  other.top >= box.bottom,
              ).toBe(true)
          })
        },
      ),
    )
  })

  test('keep off a level curve where there is room beside it', () => {
    const curves = [{ name: 'noise', tone: 'before' as const, limit: undefined, values: hz.map(() => 4) }]
    const y = linearScale([0, 8], [150, 10])
    const [{ box }] = cutLabels(curves, 30, hz, { frame, x: cutoffScale(hz, 40, 640), y })
    expect(box.bottom <= y.toPixel(4) || box.top >= y.toPixel(4)).toBe(true)
  })

  test('are none where nothing is computed', () => {
    const curves = [{ name: 'noise', tone: 'before' as const, limit: undefined, values: hz.map(() => Number.NaN) }]
    expect(
      cutLabels(curves, 30, hz, { frame, x: cutoffScale(hz, 40, 640), y: linearScale([0, 8], [150, 10]) }),
    ).toEqual([])
  })
})

describe('where the map’s filters stand', () => {
  test('is said of a chain that holds anything', () => {
    const start = startWorkspace()
    expect(placeWords(start)).toBe(', in place of stage 2')
    expect(placeWords({ ...start, tradeOff: { ...start.tradeOff, stage: 'insert' } })).toBe(', as a new last stage')
    expect(placeWords({ ...start, chain: [] })).toBe('')
  })
})

describe('cutoffs that are typed', () => {
  test('are a range above 0 that runs upwards', () => {
    expect(rangeProblem({ fromHz: 0.01, toHz: 3 })).toBeNull()
    expect(rangeProblem({ fromHz: 5, toHz: 3 })).toBe('cutoffs run upwards, not from 5 to 3 Hz')
    expect(rangeProblem({ fromHz: 3, toHz: 3 })).toBe('cutoffs run upwards, not from 3 to 3 Hz')
    expect(rangeProblem({ fromHz: -1, toHz: 3 })).toBe('cutoffs begin above 0 Hz, not at −1')
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
