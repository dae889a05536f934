import fc from 'fast-check'
import { describe, expect, test } from 'vitest'
import type { ClaimCurve, ClaimForm, ClaimVerdict } from '../../src/evidence/claims/claim.ts'
import type { StageSpec } from '../../src/filter/stage.ts'
import { curveSentence, parseNumber } from '../../src/words/index.ts'
import { curves } from './random-claims.ts'

const form: ClaimForm = { form: 'onset', direction: 'earlier', ms: 5 }
const high: StageSpec = {
  design: 'butterworth',
  pass: 'high',
  order: 2,
  cutoffsHz: [1],
  meaning: 'half-amplitude',
  direction: 'both',
}
const low: StageSpec = { ...high, pass: 'low', cutoffsHz: [30] }

/** A curve of these verdicts at these places, each flip in the middle. */
function curve(
  at: readonly number[],
  verdicts: readonly (ClaimVerdict | null)[],
  more: Partial<ClaimCurve> = {},
): ClaimCurve {
  const points = at.map((place, i) => ({ at: place, number: verdicts[i] === null ? null : i, verdict: verdicts[i] }))
  const flips = points.slice(1).flatMap(({ at: to, verdict: above }, i) => {
    const { at: from, verdict: below } = points[i]
    return below === null || above === null || below === above ? [] : [{ at: (from + to) / 2, below, above }]
  })
  return { varied: { stage: 0, what: 'cutoff', cutoff: 0 }, unit: 'Hz', present: at[0], points, flips, ...more }
}

const [Y, N, U] = ['holds', 'does not hold', 'cannot be told'] as const

describe('curveSentence', () => {
  test('one change is told from where the filter stands', () => {
    const two = curve([0.01, 0.3, 0.32, 1, 225], [N, N, Y, Y, Y])
    expect(curveSentence(form, { ...two, present: 1 })).toBe(
      'Below a cutoff of 0.31 Hz it would not hold (looked at down to 0.01 Hz).',
    )
    expect(curveSentence(form, { ...two, present: 0.02 })).toBe(
      'Above a cutoff of 0.31 Hz it would hold (looked at up to 225 Hz).',
    )
    expect(curveSentence(form, { ...two, present: 1 }, [high, low])).toBe(
      'With the cutoff of the Butterworth high-pass below 0.31 Hz it would not hold (looked at down to 0.01 Hz).',
    )
  })

  test('no change, a stretch between two changes, and what cannot be told', () => {
    expect(curveSentence(form, curve([0.01, 1, 225], [Y, Y, Y]))).toBe(
      'No cutoff from 0.01 to 225 Hz changes the answer: it holds throughout.',
    )
    expect(curveSentence(form, curve([0.1, 0.3, 0.5, 2, 2.2, 5], [N, N, Y, Y, N, N]))).toBe(
      'It holds with the cutoff between 0.4 and 2.1 Hz and not outside (looked at from 0.1 to 5 Hz).',
    )
    expect(curveSentence(form, curve([0.1, 0.3, 0.5, 2, 2.2, 5], [Y, Y, U, U, Y, Y]))).toBe(
      'It cannot be told with the cutoff between 0.4 and 2.1 Hz, and holds outside (looked at from 0.1 to 5 Hz).',
    )
    expect(curveSentence(form, curve([1, 2, 3, 4], [Y, U, N, Y]))).toBe(
      'With the cutoff varied from 1 to 4 Hz: it holds from 1 to 1.5 Hz, it cannot be told from 1.5 to 2.5 Hz, it does not hold from 2.5 to 3.5 Hz and it holds from 3.5 to 4 Hz.',
    )
  })

  test('orders are whole, and a change lies between two of them', () => {
    const orders = { varied: { stage: 0, what: 'order', cutoff: 0 }, unit: null, present: 2 } as const
    const points = curve([1, 2, 3, 4], [Y, Y, N, N], { ...orders, flips: [{ at: 3, below: Y, above: N }] })
    expect(curveSentence(form, points, [high])).toBe(
      'With the order per pass at 3 or above it would not hold (looked at up to 4).',
    )
    expect(curveSentence(form, { ...points, present: 3 }, [{ ...high, direction: 'forward' }])).toBe(
      'With the order at 2 or below it would hold (looked at down to 1).',
    )
  })

  test('a band names which cutoff, a transition width is named', () => {
    const band: StageSpec = { ...high, pass: 'band', cutoffsHz: [1, 30] }
    const same = curve([1, 2], [Y, Y])
    expect(curveSentence(form, same, [band])).toMatch(/^No lower cutoff /)
    expect(curveSentence(form, { ...same, varied: { stage: 0, what: 'cutoff', cutoff: 1 } }, [band])).toMatch(
      /^No upper cutoff /,
    )
    expect(curveSentence(form, { ...same, varied: { stage: 0, what: 'transition', cutoff: 0 } })).toMatch(
      /^No transition width /,
    )
  })

  test('where the filter cannot be realised is said, and nothing is claimed of it', () => {
    expect(curveSentence({ form: 'attenuation', hz: 50, db: 20 }, curve([1, 2, 3, 4], [Y, Y, null, null]))).toBe(
      'No cutoff from 1 to 4 Hz changes the answer where there is one: it holds from 1 to 2 Hz. From 3 to 4 Hz there is no answer, because the filter cannot be realised.',
    )
    expect(curveSentence(form, curve([1, 2], [null, null]))).toBe(
      'Nothing can be said of the cutoff from 1 to 2 Hz: there is no answer anywhere, because the filter cannot be realised or the number does not exist.',
    )
    expect(curveSentence(form, curve([], []))).toBe('Other values of the cutoff were not looked at.')
  })

  test('every change is told, and every place that is said to have an answer has it', () => {
    fc.assert(
      fc.property(curves, fc.boolean(), (drawn, named) => {
        const words = curveSentence(form, drawn, named ? [high, low] : [])
        expect(words).toMatch(/^[A-Z].*\.$/)
        expect(words).not.toMatch(/undefined|NaN|null|Infinity| {2}|\u2013/)
        const printed = [...words.matchAll(/\d+(?:\.\d+)?/g)].map(([text]) => parseNumber(text))
        const near = (value: number) => printed.some((one) => Math.abs(one - value) <= 0.005 * value)
        const whole = drawn.unit === null
        // of a border between two orders either side is a way to say it
        for (const flip of drawn.flips) expect(near(flip.at) || (whole && near(flip.at - 1)), words).toBe(true)
        for (const { at, verdict } of drawn.points) {
          const said = saidOf(words, at, drawn)
          if (said !== undefined && verdict !== null) expect(said, `${at}: ${words}`).toContain(verdict)
          if (said !== undefined && verdict === null && drawn.unit === null) expect(said).toEqual([])
        }
      }),
      { numRuns: 1000 },
    )
  })
})

/** What a list of stretches says of a place; several on a border, none where there is no answer; undefined for the other ways to say it. */
function saidOf(words: string, at: number, { unit, points }: ClaimCurve): ClaimVerdict[] | undefined {
  const listed = words.match(/^With .* varied from .*?: (.*?)\.(?: |$)(?=[A-Z]|$)/)
  if (!listed) return undefined
  // borders are printed to three digits or more, and a gap is told by its points
  const slack = unit === null ? 0 : Math.max(0.005 * at, 0.3 * (points.length > 1 ? points[1].at - points[0].at : 0))
  return listed[1].split(/, it | and it |^it /).flatMap((item) => {
    const found = item.match(
      /^(holds|does not hold|cannot be told) (?:from (\d+(?:\.\d+)?) to (\d+(?:\.\d+)?)|at (\d+(?:\.\d+)?))/,
    )
    if (!found) return []
    const from = parseNumber(found[2] ?? found[4])
    const to = parseNumber(found[3] ?? found[4])
    return at >= from - slack && at <= to + slack ? [found[1] as ClaimVerdict] : []
  })
}
