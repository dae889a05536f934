import { describe, expect, test } from 'vitest'
import { layoutBottomAxis } from '../../src/plot/axis-layout.ts'
import { linearScale } from '../../src/plot/index.ts'
import {
  amplitudeDomain,
  largestMomentMs,
  msText,
  sampleNear,
  timeAxisOf,
  timeTicks,
  unseenStretches,
} from '../../src/page/time-axis.ts'

const times = Float64Array.from({ length: 701 }, (_, i) => -400 + 2 * i)
const axis = timeAxisOf(times)

describe('timeAxisOf', () => {
  test('shows the epoch with the same margin on both sides', () => {
    expect(axis).toMatchObject({ firstMs: -400, lastMs: 1000, stepMs: 2, samples: 701 })
    expect(axis.firstMs - axis.fromMs).toBe(axis.toMs - axis.lastMs)
    expect(axis.toMs).toBeGreaterThan(1000)
  })
})

describe('sampleNear', () => {
  test('takes the nearest sample and stays in the epoch', () => {
    expect([-999, -400, -398.9, 0, 0.9, 1000, 5000].map((ms) => sampleNear(axis, ms))).toEqual([
      0, 0, 1, 200, 200, 700, 700,
    ])
  })
})

describe('largestMomentMs', () => {
  test('is the moment of the largest value of either sign', () => {
    const values = new Float64Array(701)
    values[300] = 3
    values[500] = -4
    expect(largestMomentMs(values, axis)).toBe(600)
  })

  test('is the middle of a plateau, rounding errors or not', () => {
    const values = new Float64Array(701)
    for (let i = 100; i <= 200; i++) values[i] = -4.5 + 1e-13 * (i % 3)
    expect(largestMomentMs(values, axis)).toBe(-400 + 2 * 150)
  })

  test('is the middle of a flat line', () => {
    expect(largestMomentMs(new Float64Array(701), axis)).toBe(300)
  })
})

describe('amplitudeDomain', () => {
  const curves = [Float64Array.of(-2, 8), Float64Array.of(1, 3)]

  test('holds every curve with more room at the top, whichever way is up', () => {
    const [bottom, top] = amplitudeDomain(curves, 'up')
    expect(bottom).toBeCloseTo(-3, 12)
    expect(top).toBeCloseTo(9.6, 12)
    const [below, above] = amplitudeDomain(curves, 'down')
    expect(below).toBeCloseTo(9, 12)
    expect(above).toBeCloseTo(-3.6, 12)
  })

  test('always holds zero', () => {
    expect(amplitudeDomain([Float64Array.of(5, 9)], 'up')[0]).toBeLessThan(0)
  })

  test('is 1 µV to both sides of a flat line', () => {
    expect(amplitudeDomain([new Float64Array(3)], 'down')).toEqual([1, -1])
  })
})

describe('timeTicks', () => {
  test.each([
    [-450, 1050, 864],
    [-336, 736, 864],
    [-336, 736, 602],
    [-450, 1050, 344],
    [-590, 2090, 344],
    [-36, 1036, 344],
  ])('leave room for the title in their line: %i to %i ms on %i px', (from, to, width) => {
    const x = linearScale([from, to], [44, 44 + width])
    const { ticks, title } = timeTicks(x)
    const layout = layoutBottomAxis(ticks, x.range, 200, title)
    expect(ticks.length).toBeGreaterThanOrEqual(2)
    expect(layout.title?.y).toBe(layout.labels[0].y)
  })
})

describe('unseenStretches', () => {
  const small = timeAxisOf(Float64Array.from({ length: 6 }, (_, i) => 10 * i))

  test('there are none where the data are continuous', () => {
    expect(unseenStretches(null, small)).toEqual([])
  })

  test('reach from each edge to the first sample with at most a twentieth unseen', () => {
    expect(unseenStretches(Float64Array.of(0.5, 0.06, 0.05, 0, 0.02, 0.3), small)).toEqual([
      { fromMs: 0, toMs: 20 },
      { fromMs: 40, toMs: 50 },
    ])
  })

  test('are the whole epoch, once, where every sample leans on unseen ones', () => {
    expect(unseenStretches(new Float64Array(6).fill(0.2), small)).toEqual([{ fromMs: 0, toMs: 50 }])
  })
})

describe('msText', () => {
  test('has a decimal only between whole milliseconds', () => {
    expect([400, -0, 109.375, 100.0000001].map(msText)).toEqual(['400 ms', '0 ms', '109.4 ms', '100 ms'])
  })
})
