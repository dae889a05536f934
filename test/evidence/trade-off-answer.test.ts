import fc from 'fast-check'
import { describe, expect, test } from 'vitest'
import { keepsLimits, tradeOffAnswer, type TradeOffLimits } from '../../src/evidence/trade-off-answer.ts'
import type { CellFigures } from '../../src/evidence/trade-off-figures.ts'

const cell = (
  i: number,
  bias: number | null,
  noise: number | null,
  changes: Partial<CellFigures> = {},
): CellFigures => ({
  index: i,
  cutoffIndex: i,
  rollOffIndex: 0,
  cutoffHz: (i + 1) / 10,
  rollOff: 2,
  error: null,
  bias,
  noise,
  totalError: bias === null || noise === null ? null : Math.hypot(bias, noise),
  precisionFactor: 1.5,
  equalTrialsFactor: 1.2,
  latencyShiftMs: null,
  missingShare: 0,
  ...changes,
})

const figure = fc.option(fc.double({ min: -3, max: 3, noNaN: true }), { freq: 8 })
const rows = fc
  .array(
    fc.record({ bias: figure, noise: figure.map((v) => (v === null ? null : Math.abs(v))), broken: fc.boolean() }),
    {
      minLength: 1,
      maxLength: 25,
    },
  )
  .map((list) =>
    list.map(({ bias, noise, broken }, i) =>
      broken && i % 5 === 4
        ? cell(i, null, null, { error: 'cannot be', precisionFactor: null, equalTrialsFactor: null })
        : cell(i, bias, noise),
    ),
  )
const limit = fc.option(fc.double({ min: 0, max: 3, noNaN: true }), { nil: undefined })
const limitSets = fc.record({ bias: limit, noise: limit, totalError: limit })

const keeps = (of: CellFigures, limits: TradeOffLimits) =>
  of.error === null &&
  (['bias', 'noise', 'totalError'] as const).every((name) => {
    const most = limits[name]
    const value = of[name]
    return most === undefined || (value !== null && Math.abs(value) <= most * (1 + 1e-9))
  })

describe('keepsLimits', () => {
  test('a size equal to the limit is kept, and a missing figure keeps nothing', () => {
    expect(keepsLimits(cell(0, -0.2, 1), { bias: 0.2 }).kept).toBe(true)
    expect(keepsLimits(cell(0, 0.1 + 0.2, 1), { bias: 0.3 }).kept).toBe(true)
    expect(keepsLimits(cell(0, -0.21, 1), { bias: 0.2 })).toMatchObject({ kept: false, tightest: { limit: 'bias' } })
    expect(keepsLimits(cell(0, null, 1), { bias: 5 }).kept).toBe(false)
    expect(keepsLimits(cell(0, 0, 1), { bias: 0 }).kept).toBe(true)
    expect(keepsLimits(cell(0, 1, 1, { error: 'x' }), {}).kept).toBe(false)
    expect(() => keepsLimits(cell(0, 1, 1), { noise: -1 })).toThrow(/limit of noise/)
  })
})

describe('tradeOffAnswer', () => {
  test('finds two separate regions and the best of both with its neighbours', () => {
    const row = [cell(0, 0.1, 1), cell(1, 0.15, 0.99), cell(2, 0.5, 0.8), cell(3, -0.19, 0.7), cell(4, -0.9, 0.2)]
    const answer = tradeOffAnswer(row, { bias: 0.2 })
    if (answer.kind !== 'some') throw new Error(answer.kind)
    expect(answer.allowed.map(({ first, last }) => [first.cutoffIndex, last.cutoffIndex])).toEqual([
      [0, 1],
      [3, 3],
    ])
    expect(answer.best).toBe(row[3])
    expect(answer.close).toEqual([{ first: row[3], last: row[3] }])
  })

  test('agrees with a plain search on every row and every set of limits', () => {
    fc.assert(
      fc.property(rows, limitSets, (row, limits) => {
        const answer = tradeOffAnswer(row, limits)
        const kept = row.filter((of) => keeps(of, limits))
        const usable = row.filter(
          (of) =>
            of.error === null &&
            (['bias', 'noise', 'totalError'] as const).every((name) => limits[name] === undefined || of[name] !== null),
        )
        if (answer.kind === 'nothing') {
          expect(usable).toEqual([])
          return
        }
        expect(answer.left).toBe(row.length - usable.length)
        if (answer.kind === 'none') {
          expect(kept).toEqual([])
          const violation = (of: CellFigures) =>
            Math.max(
              ...(['bias', 'noise', 'totalError'] as const).flatMap((name) => {
                const most = limits[name]
                const size = Math.abs(of[name] ?? 0)
                return most === undefined ? [] : [size === 0 ? 0 : size / most]
              }),
            )
          expect(violation(answer.least)).toBe(Math.min(...usable.map(violation)))
          expect(answer.tightest.multiples).toBe(violation(answer.least))
          expect(Math.abs(answer.least[answer.tightest.limit] as number)).toBe(answer.tightest.size)
          return
        }
        expect(answer.kind === 'all').toBe(kept.length === usable.length)
        const inside = row.filter((of) =>
          answer.allowed.some(({ first, last }) => of.cutoffHz >= first.cutoffHz && of.cutoffHz <= last.cutoffHz),
        )
        expect(inside).toEqual(kept)
        const totals = kept.flatMap(({ totalError }) => (totalError === null ? [] : [totalError]))
        if (totals.length === 0) {
          expect(answer.best).toBe(null)
          return
        }
        expect(answer.best?.totalError).toBe(Math.min(...totals))
        const close = kept.filter(
          (of) => of.totalError !== null && of.totalError <= 1.05 * Math.min(...totals) * (1 + 1e-12),
        )
        expect(
          row.filter((of) =>
            answer.close.some(({ first, last }) => of.cutoffHz >= first.cutoffHz && of.cutoffHz <= last.cutoffHz),
          ),
        ).toEqual(close)
      }),
      { numRuns: 500 },
    )
  })

  test('refuses cells of two roll-offs', () => {
    expect(() => tradeOffAnswer([cell(0, 1, 1), cell(1, 1, 1, { rollOffIndex: 1, rollOff: 4 })], {})).toThrow(
      /one roll-off/,
    )
  })
})
