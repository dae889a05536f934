import fc from 'fast-check'
import { describe, expect, test } from 'vitest'
import type { ClaimCurve } from '../../../src/evidence/claims/claim.ts'
import { curveLabels } from '../../../src/page/desks/claims/curve-labels.ts'
import { unbroken, unbrokenText } from '../../../src/page/desks/claims/unbroken.ts'
import { linearScale, logScale, makeFrame } from '../../../src/plot/index.ts'
import { claimSentence } from '../../../src/words/index.ts'

const frame = makeFrame(420, 190, { left: 44, right: 12, top: 40, bottom: 26 }, 'f')
const x = logScale([0.01, 225], [frame.left, frame.right])
const varied = { stage: 0, what: 'cutoff', cutoff: 0 } as const

/** A curve that dips around 1 Hz, with flips anywhere. */
function curveOf(flipsAt: readonly number[], depth: number, present: number): ClaimCurve {
  const grid = Array.from({ length: 60 }, (_, i) => 0.01 * (225 / 0.01) ** (i / 59))
  return {
    ...{ varied, unit: 'Hz', present },
    points: [...grid, present]
      .sort((a, b) => a - b)
      .map((at) => ({ at, number: -depth * Math.exp(-(Math.log(at) ** 2)), verdict: 'holds' as const })),
    flips: flipsAt.map((at) => ({ at, below: 'holds' as const, above: 'does not hold' as const })),
  }
}

const labelsOf = (curve: ClaimCurve, bounds: readonly number[] = []) =>
  curveLabels(curve, frame, x, linearScale([-2, 0.2], [frame.bottom, frame.top]), bounds, 'µV')
const wordsOf = (curve: ClaimCurve, bounds: readonly number[] = []) =>
  labelsOf(curve, bounds).map(({ rows }) => rows.map(({ strong, plain }) => strong ?? plain).join(' '))

describe('curveLabels', () => {
  test('names where the chain stands, every critical value and what is claimed, where there is room for all', () => {
    expect(wordsOf(curveOf([0.32, 2.43], 1.4, 1), [-0.5]).sort()).toEqual([
      '0.32 Hz',
      '2.4 Hz',
      'claimed −0.5 µV',
      'now 1 Hz',
    ])
  })

  test('names of crowded critical values those next to where the chain stands', () => {
    const words = wordsOf(curveOf([0.1, 0.101, 0.102, 0.103, 0.104, 0.9], 1, 1))
    expect(words).toContain('0.9 Hz')
    expect(words).toContain('0.1 Hz')
    expect(words.length).toBeLessThan(7)
  })

  test('does not name a bound of zero, whose line is the axis', () => {
    expect(wordsOf(curveOf([], 1, 1), [0])).toEqual(['now 1 Hz'])
  })

  const hz = fc.double({ min: -4.4, max: 5.2, noNaN: true }).map(Math.exp)
  const curves = fc.record({
    flips: fc.array(hz, { maxLength: 8 }),
    depth: fc.double({ min: 0, max: 1.9, noNaN: true }),
    present: hz,
  })

  test('lets no label leave the plot or touch another one', () => {
    fc.assert(
      fc.property(curves, fc.double({ min: 0.01, max: 1.9, noNaN: true }), ({ flips, depth, present }, bound) => {
        const sorted = [...new Set(flips)].sort((a, b) => a - b)
        const boxes = labelsOf(curveOf(sorted, depth, present), [-bound]).map(({ box }) => box)
        for (const [i, a] of boxes.entries()) {
          expect(a.left).toBeGreaterThanOrEqual(frame.left)
          expect(a.right).toBeLessThanOrEqual(frame.right)
          expect(a.top).toBeGreaterThanOrEqual(frame.top)
          expect(a.bottom).toBeLessThanOrEqual(frame.bottom)
          for (const b of boxes.slice(i + 1)) {
            const apart = a.right <= b.left || b.right <= a.left || a.bottom <= b.top || b.bottom <= a.top
            expect(apart).toBe(true)
          }
        }
      }),
      { numRuns: 60 },
    )
  })
})

describe('numbers of a claim', () => {
  const spaces = (text: string) => text.replaceAll('\u00a0', '~')

  test('stay on one line with their units, and words do not', () => {
    expect(spaces(unbrokenText('from 0.01 to 225 Hz, 95 % of 40 trials, −1.5 µV at 140 ms'))).toBe(
      'from 0.01 to 225~Hz, 95~% of 40 trials, −1.5~µV at 140~ms',
    )
    expect(unbrokenText('stage 2 msec')).toBe('stage 2 msec')
  })

  test('stay together with a unit that is a phrase of its own', () => {
    const form = { form: 'deflection', window: { fromMs: 80, toMs: 140 }, amount: 0.5, unit: 'µV' } as const
    const text = unbroken(claimSentence(form))
      .map((piece) => piece.text)
      .join('')
    expect(spaces(text)).toBe(
      'The filter makes a deflection of at least 0.5~µV between 80 and 140~ms, where the unfiltered waveform has none.',
    )
  })
})
