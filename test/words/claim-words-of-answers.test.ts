import { describe, expect, test } from 'vitest'
import { defaultNoise } from '../../src/erp/noise.ts'
import type { Component } from '../../src/erp/component.ts'
import { epochTimesMs } from '../../src/erp/waveform.ts'
import { type AnsweredForm, answerClaim } from '../../src/evidence/claims/answer-claim.ts'
import type { ClaimSetting } from '../../src/evidence/claims/claim.ts'
import { claimCurve } from '../../src/evidence/claims/claim-curve.ts'
import { claimReason, curveSentence, parseNumber } from '../../src/words/index.ts'

/** The words of answers that are computed, not made up: a 1 Hz high-pass run both ways under a late positivity. */
const late = (amplitudeUv: number): Component => ({
  name: 'late',
  shape: 'gaussian',
  amplitudeUv,
  latencyMs: 400,
  widthMs: 190,
})
const setting: ClaimSetting = {
  samplingRateHz: 250,
  timesMs: epochTimesMs(250, { fromMs: -400, toMs: 1000 }),
  chain: [
    { design: 'butterworth', pass: 'high', order: 2, cutoffsHz: [1], meaning: 'half-amplitude', direction: 'both' },
  ],
  extent: 'continuous',
  baseline: { fromMs: -200, toMs: 0 },
  score: { kind: 'mean', fromMs: 80, toMs: 140, polarity: 'positive' },
  measure: { mean: { fromMs: 300, toMs: 500 }, peak: { fromMs: 250, toMs: 600 }, polarity: 'positive' },
  conditions: [
    { name: 'rare', source: { kind: 'built', components: [late(10)] } },
    { name: 'frequent', source: { kind: 'built', components: [late(4)] } },
  ],
  chosen: { kind: 'condition', name: 'rare' },
  noise: defaultNoise(),
  noisePassed: 'nothing',
  trials: 40,
  taken: 'as it stands',
  filteredBefore: 'as stated',
  unseenThreshold: 0.05,
}
const early = { fromMs: 80, toMs: 140 }
const deflection = { form: 'deflection', window: early, amount: 0.5, unit: 'µV' } as const
const context = { filter: 'the filter', trials: 40, taken: 'as it stands' } as const

const forms: AnsweredForm[] = [
  deflection,
  { ...deflection, amount: 9 },
  { form: 'change', row: 'score', relation: 'at least', amount: 1, unit: 'own' },
  { form: 'change', row: 'mean-amplitude', relation: 'at most', amount: 5, unit: '%' },
  { form: 'change', row: 'signed-area', relation: 'at least', amount: 0.1, unit: 'own' },
  { form: 'from-outside', window: early, percent: 50 },
  { form: 'from-outside', window: { fromMs: 300, toMs: 500 }, percent: 10 },
  { form: 'onset', direction: 'earlier', ms: 10 },
  { form: 'onset', direction: 'later', ms: 10 },
  { form: 'attenuation', hz: 0.1, db: 20 },
  { form: 'attenuation', hz: 0, db: 20 },
  { form: 'tone', hz: 50, amplitudeUv: 5, belowUv: 0.1, locked: true },
  { form: 'tone', hz: 50, amplitudeUv: 0.5, belowUv: 0.1, locked: false },
]

describe('the words of computed answers', () => {
  test('each says its own number, and how it stands to the amount unless it goes the other way', () => {
    for (const form of forms) {
      const answer = answerClaim(form, setting)
      const words = claimReason(form, answer, context)
      expect(answer.grounds.kind).toBe('number')
      const number = Math.abs(answer.number as number)
      const printed = [...words.matchAll(/\d+(?:\.\d+)?/g)].map(([text]) => parseNumber(text))
      expect(
        printed.some((one) => Math.abs(one - number) <= 0.051),
        words,
      ).toBe(true)
      const bears =
        answer.verdict === 'holds'
          ? /(more than|within|below) the .* claimed/
          : /(short of|more than|not below) the .* claimed/
      if (form.form === 'onset' && (answer.number as number) < 0) expect(words).toMatch(/, not (earlier|later)\.$/)
      else expect(words).toMatch(bears)
    }
  })

  test('a shift is told in the direction in which the latencies go', () => {
    for (const direction of ['earlier', 'later'] as const) {
      const form = { form: 'onset', direction, ms: 10 } as const
      const [, where, from, to] =
        claimReason(form, answerClaim(form, setting), context).match(
          /moves (earlier|later) by [\d.]+ ms, from ([\d.]+) to ([\d.]+) ms/,
        ) ?? []
      expect(where).toBe(Number(to) > Number(from) ? 'later' : 'earlier')
    }
  })

  test('a causal version shows no early deflection, and its number is said to be its own', () => {
    const form = { form: 'twin', twin: 'causal', shows: deflection } as const
    expect(claimReason(form, answerClaim(form, setting), context)).toMatch(
      /^The filter as it is shows it: .* The causal version does not show it: the deflection that the causal version makes there is .*, short of the 0\.5 µV claimed\.$/,
    )
  })

  test('where the noise covers the amount, the interval and the trials are told', () => {
    const form = {
      form: 'effect',
      first: 'rare',
      second: 'frequent',
      window: early,
      says: 'exists without the filter',
      leastUv: 0.3,
    } as const
    const answer = answerClaim(form, { ...setting, taken: 'as measured' })
    expect(answer.verdict).toBe('cannot be told')
    expect(claimReason(form, answer, context)).toMatch(
      /with 40 trials the 95 % interval of the effect without it is −[\d.]+ to [\d.]+ µV, and the limit of 0\.3 µV lies within it\. About \d+ trials would settle it/,
    )
  })

  test('a curve’s sentence agrees with the claim answered anew on both sides of the change', () => {
    const search = claimCurve(deflection, setting, null)
    let step = search.next()
    while (!step.done) step = search.next()
    if (step.value === null) throw new Error('there must be a curve')
    const words = curveSentence(deflection, step.value, setting.chain)
    const [, from, to] = words.match(/^It holds with the cutoff between ([\d.]+) and ([\d.]+) Hz and not outside/) ?? []
    const verdictAt = (hz: number) =>
      answerClaim(deflection, {
        ...setting,
        chain: setting.chain.map((spec) => ('cutoffsHz' in spec ? { ...spec, cutoffsHz: [hz] } : spec)),
      }).verdict
    expect([0.99, 1.01].map((times) => verdictAt(Number(from) * times))).toEqual(['does not hold', 'holds'])
    expect([0.99, 1.01].map((times) => verdictAt(Number(to) * times))).toEqual(['holds', 'does not hold'])
  })
})
