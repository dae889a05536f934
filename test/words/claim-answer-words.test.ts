import fc from 'fast-check'
import { describe, expect, test } from 'vitest'
import type { ClaimAnswer, ClaimForm, ShownAnswer } from '../../src/evidence/claims/claim.ts'
import { type ClaimAnswerContext, claimReason, claimVerdictWords, parseNumber } from '../../src/words/index.ts'
import { answered, contexts } from './random-claims.ts'

const context: ClaimAnswerContext = { filter: 'the filter', trials: 40, taken: 'as measured' }
const deflection: ClaimForm & { form: 'deflection' } = {
  form: 'deflection',
  window: { fromMs: 80, toMs: 140 },
  amount: 0.5,
  unit: 'µV',
}
const shown = (answer: Partial<ShownAnswer>): ShownAnswer => ({
  verdict: 'holds',
  number: -1.19,
  unit: 'µV',
  interval: null,
  grounds: { kind: 'number' },
  values: [],
  ...answer,
})

describe('claimReason', () => {
  test('states the number, its interval and the amount', () => {
    expect(claimReason(deflection, shown({ interval: [-1.402, -0.978] }), context)).toBe(
      'The deflection that the filter makes there is −1.19 µV (95 % interval with 40 trials −1.40 to −0.98 µV), more than the 0.5 µV claimed.',
    )
    const change: ClaimForm = { form: 'change', row: 'score', relation: 'at most', amount: 5, unit: '%' }
    const values = [
      { name: 'before', value: 10, unit: 'µV' as const },
      { name: 'after', value: 9.56, unit: 'µV' as const },
    ]
    expect(claimReason(change, shown({ number: -4.4, unit: '%', values }), context)).toBe(
      'The score changes by −4.4 % of its value before, from 10.00 to 9.56 µV, within the 5 % claimed.',
    )
  })

  test('a number close to the amount is printed on its own side of it', () => {
    expect(claimReason(deflection, shown({ number: 0.49996, verdict: 'does not hold' }), context)).toBe(
      'The deflection that the filter makes there is +0.49996 µV, short of the 0.5 µV claimed.',
    )
    expect(claimReason(deflection, shown({ number: 0.5 }), context)).toContain('exactly the 0.5 µV claimed')
  })

  test('a share below zero or above all is explained', () => {
    const form: ClaimForm = { form: 'from-outside', window: { fromMs: 80, toMs: 140 }, percent: 50 }
    expect(claimReason(form, shown({ number: -20, unit: '%', verdict: 'does not hold' }), context)).toBe(
      '−20.0 % of the filtered mean amplitude comes from outside the window, short of the 50 % claimed; what comes from outside works against the value.',
    )
    expect(claimReason(form, shown({ number: 130, unit: '%' }), context)).toMatch(
      /more than the 50 % claimed; what comes from inside the window works against it\.$/,
    )
  })

  test('an attenuation without limit, and an amplification, are said as such', () => {
    const form: ClaimForm = { form: 'attenuation', hz: 50, db: 24 }
    expect(claimReason(form, shown({ number: Infinity, unit: 'dB' }), context)).toBe(
      'The filter lets nothing of 50 Hz through, more than the 24 dB claimed.',
    )
    expect(claimReason(form, shown({ number: -0.7, unit: 'dB', verdict: 'does not hold' }), context)).toBe(
      'The filter does not attenuate 50 Hz but amplifies it by 0.7 dB.',
    )
  })

  test('within noise it says how many trials would settle it, or that none would', () => {
    const answer = shown({
      verdict: 'cannot be told',
      number: 0.6,
      interval: [0.2, 1],
      grounds: { kind: 'within noise', trialsNeeded: 615 },
    })
    expect(claimReason(deflection, answer, context)).toBe(
      'The deflection that the filter makes there is +0.60 µV, but with 40 trials the 95 % interval of that is 0.20 to 1.00 µV, and the claimed 0.5 µV lies within it. About 620 trials would settle it if the numbers stayed as they are.',
    )
    const none = { ...answer, grounds: { kind: 'within noise' as const, trialsNeeded: null } }
    expect(claimReason(deflection, none, context)).toMatch(/No number of trials would settle it/)
    const other = { ...answer, interval: [0.55, 0.65] as const }
    expect(claimReason(deflection, other, context)).toContain(
      'does not let it be told whether the unfiltered waveform has none there',
    )
  })

  test('an unseen share says how much further the data would have to reach, only where that was computed', () => {
    const grounds = { kind: 'unseen' as const, share: 0.234, threshold: 0.05 }
    const answer = shown({ verdict: 'cannot be told', grounds })
    const computed = { ...answer, grounds: { ...grounds, furtherMs: { back: 900, on: 0 } } }
    expect(claimReason(deflection, computed, context)).toBe(
      '23.4 % of the weight falls on samples outside the data, more than the 5 % allowed, so that the number cannot be trusted. From the data that there are, the deflection that the filter makes there is −1.19 µV. Data that reach 900 ms further back would bring that share within what is allowed.',
    )
    expect(claimReason(deflection, answer, context)).not.toMatch(/\d ms/)
  })

  test('a twin and another meaning tell both answers', () => {
    const present = shown({})
    const compared = shown({ verdict: 'does not hold', number: 0.02 })
    const grounds = { kind: 'compared' as const, present, compared }
    expect(
      claimReason({ form: 'twin', twin: 'causal', shows: deflection }, shown({ number: null, grounds }), context),
    ).toBe(
      'The filter as it is shows it: the deflection that the filter makes there is −1.19 µV, more than the 0.5 µV claimed. ' +
        'The causal version does not show it: the deflection that the causal version makes there is +0.02 µV, short of the 0.5 µV claimed.',
    )
    expect(
      claimReason(
        { form: 'meaning', stated: 'half-power', other: 'design', conclusion: deflection },
        shown({ verdict: 'does not hold', number: null, grounds }),
        context,
      ),
    ).toMatch(
      /^With half-power cutoffs it holds: .* With design cutoffs it does not hold: .* The answer is not the same\.$/,
    )
  })

  test('the late-only fit never proves that a filter did it', () => {
    const form: ClaimForm = { form: 'late-only', t0Ms: 200, early: { fromMs: 80, toMs: 140 }, slackMs: 30 }
    const grounds = { kind: 'late-only' as const, verdict: 'it can' as const, changed: false }
    expect(claimReason(form, shown({ number: 0.31, interval: [-0.2, 0.82], grounds }), context)).toBe(
      'The fit estimates early activity of +0.31 µV in the unfiltered waveform (95 % interval −0.20 to 0.82 µV, with zero in it). Activity from the stated onset on is enough to make the deflection, which does not prove that it did.',
    )
  })

  test('whatever the answer, the reason is whole sentences, in keeping with the verdict, and its numbers parse', () => {
    fc.assert(
      fc.property(answered, contexts, ({ form, answer }, anyContext) => {
        const words = claimReason(form, answer, anyContext)
        expect(words).toMatch(/^[A-Z\d−].*\.$/)
        expect(words).not.toMatch(/undefined|NaN|null|Infinity|\.\.| {2}| ,|\u2013|-\d/)
        for (const [text] of words.matchAll(/[+−]?\d+(?:\.\d+)?/g)) expect(parseNumber(text)).not.toBeNaN()
        expect(claimVerdictWords(answer.verdict)).toMatch(/^(Holds|Does not hold|Cannot be told)$/)
        if (form.form !== 'twin' && form.form !== 'meaning') agrees(form, answer, words)
      }),
      { numRuns: 2000 },
    )
  })

  test('what is printed of a comparison is so of the printed numbers', () => {
    let compared = 0
    fc.assert(
      fc.property(answered, contexts, ({ form, answer }, anyContext) => {
        const words = claimReason(form, answer, anyContext)
        if (form.form === 'twin' || form.form === 'meaning' || form.form === 'effect') return
        const bare = words.replace(/ \([^)]*\)/g, '')
        const found = bare.match(
          /([+−]?\d+(?:\.\d+)?) (?:µV·s|µV|ms|%|dB)(?!.* Hz by).*, (more than|short of|within|below|not below|exactly) the (−?\d+(?:\.\d+)?) (?:µV·s|µV|ms|%|dB) claimed/,
        )
        if (!found || bare.includes('lets nothing')) return
        compared++
        const printed = bare.includes('does not move') ? 0 : parseNumber(found[1])
        const size = form.form === 'change' || form.form === 'deflection' ? Math.abs(printed) : printed
        const amount = parseNumber(found[3])
        const so = {
          'more than': size > amount,
          'short of': size < amount,
          within: size < amount,
          below: size < amount,
          'not below': size >= amount,
          exactly: Math.abs(size - amount) <= 1e-12 + 1e-8 * Math.abs(amount),
        }[found[2]]
        expect(so, words).toBe(true)
      }),
      { numRuns: 2000 },
    )
    expect(compared).toBeGreaterThan(400)
  })
})

/** No verdict is told with the words of another. */
function agrees(form: ClaimForm, answer: ClaimAnswer, words: string) {
  const { verdict } = answer
  const atMost = form.form === 'change' && form.relation === 'at most'
  if (verdict === 'holds') {
    expect(words).not.toMatch(/short of|not below|cannot be trusted|does not account|already|would settle/)
    if (atMost) expect(words).not.toMatch(/more than/)
  } else if (verdict === 'does not hold') {
    expect(words).not.toMatch(/, within|, below|exactly the(?! .*not)|does not prove|would settle/)
    if (!atMost && answer.grounds.kind === 'number') expect(words).not.toMatch(/more than/)
  } else expect(words).not.toMatch(/claimed\.$|short of|exactly the/)
}
