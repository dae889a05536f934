import fc from 'fast-check'
import { describe, expect, test } from 'vitest'
import type { PartRow } from '../../src/evidence/trace-by-component.ts'
import type { MomentRow } from '../../src/evidence/trace-by-moment.ts'
import { traceSummary, type TraceSummaryFacts } from '../../src/words/trace-summary.ts'

const component = { name: 'late positivity', fromMs: 250, peakMs: 400, toMs: 550 }

/** The rows of an account as in the first scenario, with any shares: two rows are the halves of a component. */
function factsOf(shares: readonly number[], more: Partial<TraceSummaryFacts> = {}): TraceSummaryFacts {
  const kinds: [MomentRow['kind'], number, number][] = [
    ['before', -Infinity, -400],
    ['other', -400, -200],
    ['baseline', -200, 0],
    ['other', 0, 80],
    ['score', 80, 140],
    ['other', 140, 250],
    ['component', 250, 400],
    ['component', 400, 550],
    ['other', 550, 1000],
    ['after', 1000, Infinity],
    ['invented', NaN, NaN],
    ['neighbours', NaN, NaN],
  ]
  const value = shares.reduce((sum, share) => sum + share, 0)
  const aboutZero = Math.abs(value) < 0.005
  let running = 0
  const rows = shares.map((share, i): MomentRow => {
    const [kind, fromMs, toMs] = kinds[i]
    running += share
    return {
      kind,
      fromMs,
      toMs,
      from: 0,
      to: 0,
      whole: true,
      component: kind === 'component' ? component : null,
      meanUv: 0,
      weight: 0,
      share,
      percent: aboutZero ? null : (100 * share) / value,
      running,
    }
  })
  const traced = { atMs: null, unit: 'µV' as const, of: 'after' as const }
  return { traced, value, aboutZero, rows, components: null, unfiltered: value, ...more }
}

const late = (share: number, value: number): PartRow[] => [
  { kind: 'component', name: 'late positivity', share, percent: (100 * share) / value },
]

describe('the sentence under the question', () => {
  test('names the component that made a false deflection, and what the score window itself gives', () => {
    const shares = [-0.001, -0.006, -0.002, -0.001, 0.038, -0.097, -0.71, -0.406, -0.012, 0]
    const text = traceSummary(factsOf(shares, { components: late(-1.188, -1.197), unfiltered: 0.05 })).text
    expect(text).toBe(
      'From the late positivity: its stretch 250 to 550 ms gives −1.12 µV, 93 % of the value. The score window itself gives only +0.04 µV.',
    )
  })

  test('does not name a component that the account by component does not bear out', () => {
    const shares = [0, 0, 0, 0, 0.04, -0.1, -0.7, -0.4, 0, 0]
    for (const components of [null, late(-0.2, -1.16)])
      expect(traceSummary(factsOf(shares, { components, unfiltered: 0 })).text).toContain(
        'From the stretch 250 to 550 ms: it gives −1.10 µV, 95 % of the value.',
      )
  })

  test('says that a value is not made by the filter where it comes from its own window, unchanged', () => {
    const shares = [0, 0, 0, 0, 5, 0.1, 0.05, 0.05, 0, 0]
    const { text } = traceSummary(factsOf(shares, { unfiltered: 5.4 }))
    expect(text).toBe('The value is not made by the filter: 96 % comes from the score window itself.')
  })

  test('does not say so where the chain changed the value', () => {
    const shares = [0, 0, 0, 0, 5, 0.1, 0.05, 0.05, 0, 0]
    const { text } = traceSummary(factsOf(shares, { unfiltered: 0.5 }))
    expect(text).toBe(
      'Most of the value, 96 %, comes from the score window itself: +5.00 µV. Before the chain it is 0.50 µV.',
    )
  })

  test('says what takes away from a window that gives more than the value', () => {
    const { text } = traceSummary(factsOf([0, 0, 0, -0.4, 6, -2.2, 0, 0, 0, 0], { unfiltered: 6.5 }))
    expect(text).toBe(
      'The score window itself gives +6.00 µV, 176 % of the value; the rest takes 2.60 µV of that away. Most against it gives the stretch 140 to 250 ms: −2.20 µV.',
    )
  })

  test('gives no per cent of a value about zero, and says what cancels', () => {
    const cancels = traceSummary(factsOf([0, 0, 0, 0, 1.5, 0, -1.5, 0.001, 0, 0])).text
    expect(cancels).toBe(
      'The value is about zero because shares cancel: +1.50 µV and −1.50 µV. The largest are the score window, 80 to 140 ms (+1.50 µV) and the stretch 250 to 550 ms (−1.50 µV).',
    )
    const nothing = traceSummary(factsOf([0, 0, 0, 0, 0.003, 0, -0.002, 0, 0, 0])).text
    expect(nothing).toBe('The value is about zero, and no stretch gives more than 0.00 µV.')
    for (const text of [cancels, nothing]) expect(text).not.toContain('%')
  })

  test('blames the padding and the neighbours by name', () => {
    const padded = traceSummary(factsOf([0, 0, 0, 0, 0.1, 0, 0, 0, 0, 0, 0.9], { unfiltered: 0.1 })).text
    expect(padded).toContain('From samples that the padding invented: they give +0.90 µV, 90 % of the value.')
    const train = traceSummary(factsOf([0, 0, 0, 0, 0.1, 0, 0, 0, 0, 0, 0, 0.9], { unfiltered: 0.1 })).text
    expect(train).toContain('From the neighbouring events: they give +0.90 µV, 90 % of the value.')
  })

  test('speaks of the surroundings of a moment where a moment is traced', () => {
    const facts = factsOf([0, 0, 0, 0, 0.1, 0, -1, 0, 0, 0], { unfiltered: 0.1 })
    const { text } = traceSummary({ ...facts, traced: { ...facts.traced, atMs: 182.4 } })
    expect(text).toContain('The time around 182.4 ms itself gives only +0.10 µV.')
  })
})

const shares = fc.array(
  fc.oneof(
    fc.integer({ min: -40, max: 40 }).map((k) => k / 1000),
    fc.integer({ min: -4000, max: 4000 }).map((k) => k / 1000),
    fc.constant(0),
  ),
  { minLength: 10, maxLength: 12 },
)

const anyFacts = fc
  .record({
    shares,
    unfiltered: fc.integer({ min: -5000, max: 5000 }).map((k) => k / 1000),
    same: fc.boolean(),
    part: fc.option(fc.integer({ min: -5000, max: 5000 }).map((k) => k / 1000)),
    unit: fc.constantFrom('µV' as const, 'µV·s' as const),
  })
  .map(({ shares, unfiltered, same, part, unit }) => {
    const facts = factsOf(shares, { components: part === null ? null : late(part, 1) })
    return { ...facts, unfiltered: same ? facts.value : unfiltered, traced: { ...facts.traced, unit } }
  })

/** "−1.12 µV" or "93 %" as a number. */
const read = (text: string) => Number(text.replace('−', '-').replace(/ (µV·s|µV|%)$/, ''))
const rowsWhere = (facts: TraceSummaryFacts, wanted: (row: MomentRow) => boolean) =>
  facts.rows.filter(wanted).reduce((sum, { share }) => sum + share, 0)

describe('whatever the numbers are', () => {
  test('every number of the sentence is that of rows of the table, or of their sum', () => {
    fc.assert(
      fc.property(anyFacts, (facts) => {
        const { text, said } = traceSummary(facts)
        let rest = text
        for (const { text: number, amount, form, of } of said) {
          expect(rest).toContain(number)
          rest = rest.replace(number, '')
          const sum =
            of === 'unfiltered' ? facts.unfiltered : of.rows.reduce((total, i) => total + facts.rows[i].share, 0)
          const expected = form === 'percent' ? (100 * sum) / facts.value : form === 'size' ? Math.abs(sum) : sum
          expect(amount).toBeCloseTo(expected, 9)
          const half = form === 'percent' ? 0.5 : facts.traced.unit === 'µV' ? 0.005 : 0.0005
          expect(Math.abs(read(number) - expected)).toBeLessThanOrEqual(half + 1e-9)
        }
        // what is left are moments, no amounts
        expect(rest).not.toMatch(/\d+(\.\d+)? (µV|%)/)
      }),
      { numRuns: 1500 },
    )
  })

  test('every claim of the sentence is true of the rows', () => {
    const met = new Map<string, number>()
    fc.assert(
      fc.property(anyFacts, (facts) => {
        const { text } = traceSummary(facts)
        const { value, rows, unfiltered, aboutZero } = facts
        const own = rowsWhere(facts, ({ kind }) => kind === 'score')
        const claim = (words: string, truth: () => void) => {
          if (!text.includes(words)) return
          met.set(words, (met.get(words) ?? 0) + 1)
          truth()
        }
        expect(text).not.toMatch(/NaN|Infinity|undefined|null/)
        expect(text.endsWith('.')).toBe(true)
        if (aboutZero) {
          expect(text).toContain('about zero')
          expect(text).not.toContain('%')
        } else expect(text).not.toContain('about zero')
        claim('not made by the filter', () => {
          expect(Math.abs(value - unfiltered)).toBeLessThanOrEqual(0.25 * Math.abs(value))
          expect(own / value).toBeGreaterThanOrEqual(0.8)
          expect(own / value).toBeLessThanOrEqual(1.25)
        })
        claim('Most of the value', () => expect(own / value).toBeGreaterThanOrEqual(0.5))
        claim('More than the whole value', () => expect(own / value).toBeGreaterThan(1))
        claim('gives only', () => expect(Math.abs(own)).toBeLessThanOrEqual(0.2 * Math.abs(value)))
        claim('no stretch gives half of it', () => {
          const halves = rowsWhere(facts, ({ kind }) => kind === 'component')
          for (const share of [halves, ...rows.filter(({ kind }) => kind !== 'component').map((row) => row.share)])
            expect(share / value).toBeLessThan(0.5)
        })
        claim('nearly cancel', () => {
          const positive = rowsWhere(facts, ({ share }) => share > 0)
          const negative = rowsWhere(facts, ({ share }) => share < 0)
          expect(Math.min(positive, -negative)).toBeGreaterThanOrEqual(2 * Math.abs(value) - 1e-9)
        })
        claim('From the late positivity', () => {
          expect(rowsWhere(facts, ({ kind }) => kind === 'component') / value).toBeGreaterThanOrEqual(0.5)
          expect((facts.components?.[0].share as number) / value).toBeGreaterThanOrEqual(0.5)
        })
        claim('From samples that the padding invented', () =>
          expect(rowsWhere(facts, ({ kind }) => kind === 'invented') / value).toBeGreaterThanOrEqual(0.5),
        )
        claim('From the neighbouring events', () =>
          expect(rowsWhere(facts, ({ kind }) => kind === 'neighbours') / value).toBeGreaterThanOrEqual(0.5),
        )
        claim('of that away', () => expect(own / value).toBeGreaterThan(1.25))
      }),
      { numRuns: 4000 },
    )
    // each claim was made, so that none is true for want of a case
    for (const words of [
      'not made by the filter',
      'Most of the value',
      'More than the whole value',
      'gives only',
      'no stretch gives half of it',
      'nearly cancel',
      'From the late positivity',
      'of that away',
    ])
      expect(met.get(words) ?? 0, words).toBeGreaterThan(0)
  })
})
