import fc from 'fast-check'
import { describe, expect, test } from 'vitest'
import { commonRuns, runsBelow, stepLines } from '../../src/plot/level-steps.ts'

const grid = fc.integer({ min: 1, max: 7 }).chain((columns) =>
  fc.integer({ min: 1, max: 5 }).chain((rows) =>
    fc
      .array(fc.oneof(fc.integer({ min: -4, max: 4 }), fc.constant(Number.NaN)), {
        minLength: columns * rows,
        maxLength: columns * rows,
      })
      .map((values) => ({ values, columns, rows })),
  ),
)

describe('the runs below a level', () => {
  test('end where the line between two cells crosses it', () => {
    // middles at 0.5, 1.5, 2.5: from −1 to 3 it crosses 0 after a quarter
    expect(runsBelow([-1, 3, -1], 3, 1, 0).inside).toEqual([
      [
        { from: 0, to: 0.75 },
        { from: 2.25, to: 3 },
      ],
    ])
  })

  test('go up to the edge of a cell beside one that is not known', () => {
    const { inside, known } = runsBelow([-1, Number.NaN, -2, 2], 4, 1, 0)
    expect(known).toEqual([
      [
        { from: 0, to: 1 },
        { from: 2, to: 4 },
      ],
    ])
    expect(inside).toEqual([
      [
        { from: 0, to: 1 },
        { from: 2, to: 3 },
      ],
    ])
  })

  test('hold a value that is equal to the level, and nothing of one above', () => {
    expect(runsBelow([0, 0], 2, 1, 0).inside).toEqual([[{ from: 0, to: 2 }]])
    expect(runsBelow([1, 2], 2, 1, 0).inside).toEqual([[]])
  })

  test('hold the middle of exactly those cells that are below', () => {
    fc.assert(
      fc.property(grid, ({ values, columns, rows }) => {
        const { inside } = runsBelow(values, columns, rows, 0.5)
        values.forEach((value, i) => {
          const middle = (i % columns) + 0.5
          const held = inside[Math.floor(i / columns)].some(({ from, to }) => middle > from && middle < to)
          expect(held).toBe(value <= 0.5)
        })
      }),
    )
  })

  test('are refused for values that do not fill the grid or are infinite', () => {
    expect(() => runsBelow([1, 2, 3], 2, 2, 0)).toThrow('values must fill 2 × 2 cells, were 3')
    expect(() => runsBelow([Number.NEGATIVE_INFINITY], 1, 1, 0)).toThrow('values[0] must be finite or NaN')
  })
})

test('what is in both is what either has in common', () => {
  const a = { from: 0, to: 2 }
  const b = { from: 3, to: 5 }
  expect(commonRuns([[a, b]], [[{ from: 1, to: 4 }]])).toEqual([
    [
      { from: 1, to: 2 },
      { from: 3, to: 4 },
    ],
  ])
  expect(commonRuns([[a, b]], [[]])).toEqual([[]])
})

describe('the lines of a level', () => {
  test('are one line in steps, without the edges of the grid', () => {
    // inside to the left of 1 in the lower row, of 2 in the upper one
    expect(stepLines(runsBelow([-1, 1, 3, -1, -1, 1], 3, 2, 0))).toEqual([
      [
        [1, 0],
        [1, 1],
        [2, 1],
        [2, 2],
      ],
    ])
  })

  test('close around a region inside the grid', () => {
    const [line, ...others] = stepLines(runsBelow([1, 1, 1, 1, -1, 1, 1, 1, 1], 3, 3, 0))
    expect(others).toEqual([])
    expect(line).toHaveLength(5)
    expect(line[0]).toEqual(line[4])
    expect(new Set(line.map(String))).toEqual(new Set(['1,1', '2,1', '2,2', '1,2']))
  })

  test('leave out the edge of what is not known, beside it and above it', () => {
    expect(stepLines(runsBelow([-1, Number.NaN, Number.NaN, 1], 2, 2, 0))).toEqual([])
  })

  test('are none where all is inside, or nothing', () => {
    expect(stepLines(runsBelow([-1, -1, -1, -1], 2, 2, 0))).toEqual([])
    expect(stepLines(runsBelow([1, 1, 1, 1], 2, 2, 0))).toEqual([])
  })

  test('part inside from outside wherever they meet, and nothing else', () => {
    fc.assert(
      fc.property(grid, ({ values, columns, rows }) => {
        const runs = runsBelow(values, columns, rows, 0.5)
        const holds = (row: readonly { from: number; to: number }[] | undefined, at: number) =>
          row === undefined ? null : row.some(({ from, to }) => at > from && at < to)
        for (const line of stepLines(runs))
          for (let i = 1; i < line.length; i++) {
            // not halfway, where one row may begin as the other ends
            const [c, r] = line[i - 1].map((value, k) => value + 0.3719 * (line[i][k] - value))
            const upright = line[i - 1][0] === line[i][0]
            const near = 1e-4
            const sides = upright
              ? [holds(runs.inside[Math.floor(r)], c - near), holds(runs.inside[Math.floor(r)], c + near)]
              : [holds(runs.inside[r - 1], c), holds(runs.inside[r], c)]
            expect(new Set(sides).size).toBe(2)
            if (upright) expect(c > 0 && c < columns).toBe(true)
            else expect(r > 0 && r < rows).toBe(true)
          }
      }),
    )
  })
})
