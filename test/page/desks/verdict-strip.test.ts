import fc from 'fast-check'
import { describe, expect, test } from 'vitest'
import type { ClaimCurve, ClaimVerdict } from '../../../src/evidence/claims/claim.ts'
import { verdictStretches } from '../../../src/page/desks/claims/verdict-strip.ts'

const varied = { stage: 0, what: 'cutoff', cutoff: 0 } as const
type Told = ClaimVerdict | null

function curve(
  points: readonly [number, Told][],
  flips: ClaimCurve['flips'] = [],
  unit: 'Hz' | null = 'Hz',
): ClaimCurve {
  return { varied, unit, present: 1, points: points.map(([at, verdict]) => ({ at, number: 1, verdict })), flips }
}

describe('verdictStretches', () => {
  test('is one stretch from the first to the last point where the answer never changes', () => {
    expect(
      verdictStretches(
        curve([
          [0.1, 'holds'],
          [1, 'holds'],
          [10, 'holds'],
        ]),
      ),
    ).toEqual([{ verdict: 'holds', from: 0.1, to: 10 }])
  })

  test('changes at the critical value', () => {
    const flip = { at: 2.3, below: 'holds', above: 'does not hold' } as const
    expect(
      verdictStretches(
        curve(
          [
            [0.1, 'holds'],
            [1, 'holds'],
            [10, 'does not hold'],
          ],
          [flip],
        ),
      ),
    ).toEqual([
      { verdict: 'holds', from: 0.1, to: 2.3 },
      { verdict: 'does not hold', from: 2.3, to: 10 },
    ])
  })

  test('ends half-way, on the logarithm, to a point where there is no answer', () => {
    expect(
      verdictStretches(
        curve([
          [0.1, null],
          [10, 'holds'],
        ]),
      ),
    ).toEqual([
      { verdict: null, from: 0.1, to: 1 },
      { verdict: 'holds', from: 1, to: 10 },
    ])
  })

  test('of orders changes between the last on the one side and the first on the other', () => {
    const flip = { at: 3, below: 'holds', above: 'does not hold' } as const
    expect(
      verdictStretches(
        curve(
          [
            [1, 'holds'],
            [2, 'holds'],
            [3, 'does not hold'],
          ],
          [flip],
          null,
        ),
      ),
    ).toEqual([
      { verdict: 'holds', from: 1, to: 2.5 },
      { verdict: 'does not hold', from: 2.5, to: 3 },
    ])
  })

  const verdicts = fc.array(fc.constantFrom<Told>('holds', 'does not hold', 'cannot be told', null), {
    minLength: 1,
    maxLength: 30,
  })

  test('covers the whole range without a gap, no two neighbours alike, and every point lies in a stretch of its own verdict', () => {
    fc.assert(
      fc.property(verdicts, fc.constantFrom<'Hz' | null>('Hz', null), (told, unit) => {
        const points = told.map((verdict, i): [number, Told] => [i + 1, verdict])
        const stretches = verdictStretches(curve(points, [], unit))
        expect(stretches[0].from).toBe(1)
        expect(stretches[stretches.length - 1].to).toBe(told.length)
        for (let i = 1; i < stretches.length; i++) {
          expect(stretches[i].from).toBe(stretches[i - 1].to)
          expect(stretches[i].verdict).not.toBe(stretches[i - 1].verdict)
        }
        for (const [at, verdict] of points)
          expect(stretches.some((one) => one.from <= at && at <= one.to && one.verdict === verdict)).toBe(true)
      }),
    )
  })
})
