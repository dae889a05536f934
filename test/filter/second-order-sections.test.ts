import { describe, expect, test } from 'vitest'
import { pairSections } from '../../src/filter/second-order-sections.ts'
import { rowsOf } from './measure.ts'

const infinity = { re: Infinity, im: 0 }

describe('pairing', () => {
  test('puts the poles nearest to the unit circle last and the gain first', () => {
    const poles = [
      { re: -0.1, im: 0.5 },
      { re: -0.4, im: 0.3 },
    ]
    const rows = rowsOf(
      pairSections(
        poles.flatMap(() => [infinity, infinity]),
        poles,
        0.25,
      ).sections,
    )
    expect(rows[0].slice(0, 3)).toEqual([0.25, 0.5, 0.25])
    expect(rows[1].slice(0, 3)).toEqual([1, 2, 1])
    expect(rows[0][5]).toBeLessThan(rows[1][5])
  })

  test('gives an odd order a pole and a zero at z = 0, and pairs zeros with the nearest poles', () => {
    // Source: SciPy 1.17, butter(3, 30, fs=500, output='sos'): the zero at 0 goes to whichever pole is nearer (computed)
    const g = Math.tan((Math.PI * 30) / 500)
    const poles = [
      { re: -g / 2, im: (g * Math.sqrt(3)) / 2 },
      { re: -g, im: 0 },
    ]
    const { sections, analogue } = pairSections([infinity, infinity, infinity], poles, 1)
    const rows = rowsOf(sections)
    expect(rows[0].slice(0, 3)).toEqual([1, 2, 1])
    expect(rows[1].slice(0, 3)).toEqual([1, 1, 0])
    expect(rows[0][5]).toBe(0)
    // the two forms agree at z = −j, that is σ = j
    const at = rowsOf(analogue).reduce((product, [c2, c1, c0, d2, d1, d0]) => {
      return (product * Math.hypot(c0 - c2, c1)) / Math.hypot(d0 - d2, d1)
    }, 1)
    const direct = rows.reduce((product, [b0, b1, b2, , a1, a2]) => {
      return (product * Math.hypot(b0 - b2, b1)) / Math.hypot(1 - a2, a1)
    }, 1)
    expect(at / direct).toBeCloseTo(1, 12)
  })

  test('writes a first order as one row of first order', () => {
    const { analogue } = pairSections([{ re: 0, im: 0 }], [{ re: -0.25, im: 0 }], 0.8)
    expect([...analogue]).toEqual([0, 1, 0, 0, 1, 0.25])
  })
})
