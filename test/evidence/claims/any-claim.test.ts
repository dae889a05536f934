import fc from 'fast-check'
import { expect, test } from 'vitest'
import { type AnsweredForm, answerClaim } from '../../../src/evidence/claims/answer-claim.ts'
import type { ClaimGrounds, ClaimSetting, ShownAnswer, ShownClaim } from '../../../src/evidence/claims/claim.ts'
import { settings } from './claim-settings.ts'

/** Any claim on any setting: what holds of every answer, whatever it says. */

const amounts = fc.constantFrom(0, 0.1, 1, 5, 50)
const meanings = fc.constantFrom('half-amplitude' as const, 'half-power' as const, 'design' as const)

function shownForms({ measure }: ClaimSetting): fc.Arbitrary<ShownClaim> {
  const window = fc.constantFrom(measure.mean, measure.peak)
  return fc.oneof(
    fc.record({
      form: fc.constant('change' as const),
      row: fc.constantFrom(
        'score' as const,
        'mean-amplitude' as const,
        'peak-amplitude' as const,
        'onset-latency' as const,
      ),
      relation: fc.constantFrom('at least' as const, 'at most' as const),
      amount: amounts,
      unit: fc.constantFrom('own' as const, '%' as const),
    }),
    fc.record({
      form: fc.constant('deflection' as const),
      window,
      amount: amounts,
      unit: fc.constantFrom('µV' as const, '%' as const),
    }),
    fc.record({ form: fc.constant('from-outside' as const), window, percent: amounts }),
    fc.record({
      form: fc.constant('effect' as const),
      first: fc.constant('one'),
      second: fc.constant('two'),
      window,
      says: fc.constantFrom(
        'exists without the filter' as const,
        'is absent without the filter' as const,
        'changes sign' as const,
      ),
      leastUv: fc.constantFrom(0.1, 1, 5),
    }),
    fc.record({
      form: fc.constant('onset' as const),
      direction: fc.constantFrom('earlier' as const, 'later' as const),
      ms: amounts,
    }),
  )
}

function forms(setting: ClaimSetting): fc.Arbitrary<AnsweredForm> {
  const shown = shownForms(setting)
  const hz = fc.constantFrom(0, 1, 10, 50)
  return fc.oneof(
    { weight: 4, arbitrary: shown },
    fc.record({ form: fc.constant('attenuation' as const), hz, db: amounts }),
    fc.record({ form: fc.constant('tone' as const), hz, amplitudeUv: amounts, belowUv: amounts, locked: fc.boolean() }),
    fc.record({
      form: fc.constant('twin' as const),
      twin: fc.constantFrom('causal' as const, 'zero-phase' as const),
      shows: shown,
    }),
    fc.record({ form: fc.constant('meaning' as const), stated: meanings, other: meanings, conclusion: shown }),
  )
}

const asked = settings.chain((setting) =>
  fc.record({
    form: forms(setting),
    setting: fc
      .record({
        taken: fc.constantFrom('as it stands' as const, 'as measured' as const),
        trials: fc.constantFrom(1, 30, 1e6),
        unseenThreshold: fc.constantFrom(0.05, 0.5, 1),
        filteredBefore: fc.constantFrom('as stated' as const, 'as stated' as const, 'not known' as const),
      })
      .map((more): ClaimSetting => ({ ...setting, ...more })),
  }),
)

const allFinite = (value: unknown): boolean =>
  typeof value === 'number'
    ? Number.isFinite(value)
    : value === null || typeof value !== 'object' || Object.values(value).every(allFinite)

function expectSound(answer: ShownAnswer, form: AnsweredForm, setting: ClaimSetting): void {
  const { verdict, number, interval, grounds } = answer
  const untold: ClaimGrounds['kind'][] = [
    'within noise',
    'unseen',
    'filtered before',
    'no value',
    'about zero',
    'no twin',
    'no meaning',
  ]
  if (untold.includes(grounds.kind)) expect(verdict).toBe('cannot be told')
  if (['number', 'already there', 'not shown'].includes(grounds.kind)) expect(verdict).not.toBe('cannot be told')
  if (verdict !== 'cannot be told') expect(number).not.toBeNull()
  const measured = setting.taken === 'as measured' || setting.conditions[0].source.kind === 'recorded'
  if (!measured) expect(interval).toBeNull()
  if (!measured) expect(grounds.kind).not.toBe('within noise')
  if (interval !== null && number !== null) {
    expect(interval[0]).toBeLessThanOrEqual(number + 1e-9 * Math.abs(number))
    expect(interval[1]).toBeGreaterThanOrEqual(number - 1e-9 * Math.abs(number))
  }
  if (grounds.kind === 'within noise' && grounds.trialsNeeded !== null)
    expect(grounds.trialsNeeded).toBeGreaterThanOrEqual(setting.trials)
  if (grounds.kind === 'compared') {
    const inner = form.form === 'twin' ? form.shows : form.form === 'meaning' ? form.conclusion : form
    expectSound(grounds.present, inner, setting)
    expectSound(grounds.compared, inner, setting)
  }
}

test('an answer is finite throughout, its grounds fit its verdict, and its interval holds its number', () => {
  const kinds = new Set<string>()
  fc.assert(
    fc.property(asked, ({ form, setting }) => {
      let answer: ShownAnswer
      try {
        answer = answerClaim(form, setting)
      } catch (error) {
        // an area of one sample, per cent of a latency, a cutoff that the other meaning cannot have: refused, never answered
        if (!(error instanceof RangeError)) throw error
        fc.pre(false)
        return
      }
      kinds.add(answer.grounds.kind)
      expect(allFinite(answer)).toBe(true)
      expectSound(answer, form, setting)
      // the same question has the same answer
      expect(answerClaim(form, setting)).toEqual(answer)
    }),
    { numRuns: 80 },
  )
  for (const kind of ['number', 'within noise', 'unseen', 'compared']) expect(kinds).toContain(kind)
})
