import fc from 'fast-check'
import { describe, expect, test } from 'vitest'
import type { ClaimForm } from '../../src/evidence/claims/claim.ts'
import { claimFormName, claimSentence, claimText } from '../../src/words/index.ts'
import { forms } from './random-claims.ts'

const tokensOf = (form: ClaimForm) =>
  Object.fromEntries(
    claimSentence(form, { scoreUnit: 'µV' }).flatMap((piece) =>
      piece.kind === 'token' ? [[piece.id, piece.text]] : [],
    ),
  )

describe('claimSentence', () => {
  test('every form has its sentence', () => {
    const deflection = { form: 'deflection', window: { fromMs: 80, toMs: 140 }, amount: 0.5, unit: 'µV' } as const
    expect(claimText(deflection)).toBe(
      'The filter makes a deflection of at least 0.5 µV between 80 and 140 ms, where the unfiltered waveform has none.',
    )
    expect(claimText({ ...deflection, unit: '%', amount: 10 })).toBe(
      'The filter makes a deflection of at least 10 % (of the whole unfiltered waveform’s largest absolute value) between 80 and 140 ms, where the unfiltered waveform has none.',
    )
    expect(claimText({ form: 'change', row: 'peak-latency', relation: 'at most', amount: 4, unit: 'own' })).toBe(
      'The filter changes the peak latency by at most 4 ms.',
    )
    const score = { form: 'change', row: 'score', relation: 'at least', amount: 10, unit: 'own' } as const
    expect(claimText(score, { scoreUnit: 'µV·s' })).toBe('The filter changes the score by at least 10 µV·s.')
    expect(claimText(score)).toBe('The filter changes the score by at least 10 in its own unit.')
    expect(claimText({ ...score, unit: '%' })).toBe(
      'The filter changes the score by at least 10 % of its value before.',
    )
    expect(claimText({ form: 'from-outside', window: { fromMs: -20, toMs: 30 }, percent: 50 })).toBe(
      'At least 50 % of the filtered mean amplitude from −20 to 30 ms comes from outside that window.',
    )
    expect(
      claimText({
        form: 'effect',
        first: 'rare',
        second: 'frequent',
        window: { fromMs: 300, toMs: 500 },
        says: 'changes sign',
        leastUv: 0.5,
      }),
    ).toBe(
      'The effect rare minus frequent, as the difference in mean amplitude from 300 to 500 ms, has opposite signs without and with the filter, where an effect smaller than 0.5 µV counts as absent.',
    )
    expect(claimText({ form: 'attenuation', hz: 50, db: 24 })).toBe('The filter attenuates 50 Hz by at least 24 dB.')
    expect(claimText({ form: 'tone', hz: 60, amplitudeUv: 5, belowUv: 0.1, locked: true })).toBe(
      'A tone of 60 Hz with an amplitude (half of peak to peak) of 5 µV in single trials before the filter, locked to the event, falls below 0.1 µV in the filtered average.',
    )
    expect(claimText({ form: 'twin', twin: 'causal', shows: deflection })).toBe(
      'The filter shows the following, and a causal version of it would not: the filter makes a deflection of at least 0.5 µV between 80 and 140 ms, where the unfiltered waveform has none.',
    )
    expect(
      claimText({
        form: 'meaning',
        stated: 'half-amplitude',
        other: 'half-power',
        conclusion: { form: 'onset', direction: 'earlier', ms: 10 },
      }),
    ).toBe(
      'The reported cutoffs are half-amplitude cutoffs; if they were half-power cutoffs instead, the answer to the following would be the same: the filter moves the onset of the waveform earlier by at least 10 ms.',
    )
    expect(claimText({ form: 'late-only', t0Ms: 200, early: { fromMs: 80, toMs: 140 }, slackMs: 30 })).toBe(
      'The filter alone can make the deflection between 80 and 140 ms from activity that begins no earlier than 200 ms, or at most 30 ms before that.',
    )
  })

  test('the tokens of a statement within another are marked as inner', () => {
    expect(
      tokensOf({
        form: 'twin',
        twin: 'zero-phase',
        shows: { form: 'deflection', window: { fromMs: 80, toMs: 140 }, amount: 0.5, unit: 'µV' },
      }),
    ).toEqual({ twin: 'zero-phase', 'inner:amount': '0.5', 'inner:unit': 'µV', 'inner:window': '80 and 140 ms' })
  })

  test('every parameter of every form is a token, each with a name and an id of its own', () => {
    const parameters = (form: ClaimForm): number =>
      form.form === 'twin'
        ? 1 + parameters(form.shows)
        : form.form === 'meaning'
          ? 2 + parameters(form.conclusion)
          : Object.keys(form).length - 1
    fc.assert(
      fc.property(forms, (form) => {
        const tokens = claimSentence(form).filter((piece) => piece.kind === 'token')
        expect(tokens.length).toBe(parameters(form))
        expect(new Set(tokens.map(({ id }) => id)).size).toBe(tokens.length)
        for (const { label, text } of tokens) expect(label.trim() !== '' && text.trim() !== '').toBe(true)
      }),
    )
  })

  test('every sentence is one sentence, and says nothing of undefined or of what is no number', () => {
    fc.assert(
      fc.property(forms, (form) => {
        const words = claimText(form)
        expect(words).toMatch(/^[A-Z].*[^.]\.$/)
        expect(words).not.toMatch(/undefined|NaN|null|Infinity| {2}|-\d/)
        expect(claimFormName(form)).toBe(claimFormName(form.form))
      }),
    )
  })
})
