import fc from 'fast-check'
import { describe, expect, test } from 'vitest'
import { readFileSync } from 'node:fs'
import { onsetOfBuilt } from '../../../src/evidence/onset-of-built.ts'
import { fidelityRows } from '../../../src/evidence/fidelity.ts'
import { momentRows, traceByMoment } from '../../../src/evidence/trace-by-moment.ts'
import { isTraced, tracedWeights } from '../../../src/evidence/traced-weights.ts'
import { type AnsweredForm, answerClaim, claimBounds } from '../../../src/evidence/claims/answer-claim.ts'
import type { ClaimRow, ClaimSetting } from '../../../src/evidence/claims/claim.ts'
import { claimChain, claimedWaveform, prepareClaim } from '../../../src/evidence/claims/claimed-waveform.ts'
import type { StageSpec } from '../../../src/filter/stage.ts'
import { built, firstSight, gaussian, highPass, lowPass, recorded, settings } from './claim-settings.ts'

const early = { fromMs: 80, toMs: 140 }
const named = (answer: { values: readonly { name: string; value: number }[] }, name: string) =>
  answer.values.find((entry) => entry.name === name)?.value

const claimed = (setting: ClaimSetting) => {
  const prepared = prepareClaim(setting)
  return claimedWaveform(prepared, setting.chosen, claimChain(prepared, setting.chain))
}
const withHighPass = (cutoffHz: number): StageSpec[] =>
  firstSight.chain.map((spec, i) => (i === 1 ? highPass(cutoffHz) : spec))

describe('the first sight', () => {
  test('is 1.2 µV less at 80–140 ms, where nothing was', () => {
    const answer = answerClaim(
      { form: 'change', row: 'score', relation: 'at least', amount: 1, unit: 'own' },
      firstSight,
    )
    expect(answer.verdict).toBe('holds')
    expect(answer.number).toBeCloseTo(-1.2, 1)
    expect(Math.abs(named(answer, 'before') as number)).toBeLessThan(0.1)
  })

  const deflection = (amount: number): AnsweredForm => ({ form: 'deflection', window: early, amount, unit: 'µV' })

  test('makes a deflection of at least 1 µV there with a 1 Hz high-pass', () => {
    expect(answerClaim(deflection(1), firstSight)).toMatchObject({ verdict: 'holds', grounds: { kind: 'number' } })
  })

  test('does not reach 0.2 µV there with 0.1 Hz', () => {
    const answer = answerClaim(deflection(0.2), { ...firstSight, chain: withHighPass(0.1) })
    expect(answer.verdict).toBe('does not hold')
    expect(Math.abs(answer.number as number)).toBeLessThan(0.2)
  })

  test('would not show it with the causal twin', () => {
    const answer = answerClaim({ form: 'twin', twin: 'causal', shows: deflection(1) as never }, firstSight)
    expect(answer.verdict).toBe('holds')
    expect(answer.grounds).toMatchObject({
      kind: 'compared',
      present: { verdict: 'holds' },
      compared: { verdict: 'does not hold' },
    })
  })

  test('without its amplifier the causal twin makes nothing at all before the first activity', () => {
    const setting = built(
      [{ shape: 'ramp', name: 'late', amplitudeUv: 8, latencyMs: 400, widthMs: 200, riseShare: 0.4 }],
      {
        chain: [highPass(1)],
        baseline: 'none',
      },
    )
    const form: AnsweredForm = {
      form: 'twin',
      twin: 'causal',
      shows: { form: 'deflection', window: { fromMs: -300, toMs: 200 }, amount: 0.5, unit: 'µV' },
    }
    const answer = answerClaim(form, setting)
    expect(answer.verdict).toBe('holds')
    // the ramp begins at 240 ms; a causal filter is exactly 0 before it
    expect(answer.number).toBe(0)
  })
})

describe('numbers are the readout’s', () => {
  const rows: ClaimRow[] = [
    'score',
    'mean-amplitude',
    'peak-amplitude',
    'signed-area',
    'peak-latency',
    'area-latency',
    'onset-latency',
  ]

  test('of every row, in its unit and in per cent, for random chains and waveforms', () => {
    let compared = 0
    fc.assert(
      fc.property(
        settings,
        fc.constantFrom(...rows),
        fc.constantFrom('own' as const, '%' as const),
        (setting, row, unit) => {
          const { before, after } = claimed(setting)
          const { timesMs, score, measure } = setting
          const onsetMs = null
          const expected = fidelityRows({ timesMs, before, after, score, measure, onsetMs }).find(
            ({ id }) => id === row,
          )
          if (!expected) throw new Error(`no row ${row}`)
          fc.pre(expected.unit !== 'ms' || unit === 'own')
          // the noise is no matter here, and simulations take long
          const quiet = { ...setting, trials: 1e12 }
          fc.pre(setting.conditions[0].source.kind === 'built' || ['score', 'mean-amplitude'].includes(row))
          const answer = answerClaim({ form: 'change', row, relation: 'at least', amount: 1, unit }, quiet)
          if (typeof expected.before === 'string' || typeof expected.after === 'string') {
            expect(answer.grounds.kind).toBe('no value')
            expect(answer.number).toBeNull()
            return
          }
          compared++
          expect(answer.number).toBe(unit === '%' ? expected.percent : expected.change)
          expect(named(answer, 'before')).toBe(expected.before)
          expect(named(answer, 'after')).toBe(expected.after)
          if (answer.verdict !== 'cannot be told')
            expect(answer.verdict).toBe(Math.abs(answer.number as number) >= 1 ? 'holds' : 'does not hold')
        },
      ),
      { numRuns: 120 },
    )
    expect(compared).toBeGreaterThan(40)
  })

  test('of an onset’s shift, counted in the claimed direction', () => {
    const later = answerClaim({ form: 'onset', direction: 'later', ms: 5 }, firstSight)
    const earlier = answerClaim({ form: 'onset', direction: 'earlier', ms: 5 }, firstSight)
    const change = answerClaim(
      { form: 'change', row: 'onset-latency', relation: 'at least', amount: 5, unit: 'own' },
      firstSight,
    )
    expect(later.number).toBe(change.number)
    expect(earlier.number).toBe(-(change.number as number))
    expect([later.verdict, earlier.verdict]).toEqual(['holds', 'does not hold'])
  })

  test('of a false deflection: where the window is all before the onset, the readout’s strongest', () => {
    const { timesMs, chosen, score, measure } = firstSight
    const source = firstSight.conditions.find((c) => chosen.kind === 'condition' && c.name === chosen.name)?.source
    if (source?.kind !== 'built') throw new Error('the first sight is built')
    const onsetMs = onsetOfBuilt(source.components, timesMs)
    const { before, after } = claimed(firstSight)
    const rowsHere = fidelityRows({ timesMs, before, after, score, measure, onsetMs })
    const row = rowsHere.find(({ id }) => id === 'false-deflection')
    const window = { fromMs: timesMs[0], toMs: onsetMs as number }
    const answer = answerClaim({ form: 'deflection', window, amount: 1, unit: 'µV' }, firstSight)
    expect(answer.number).toBe(row?.change)
    expect(named(answer, 'at')).toBe(row?.label.atMs)
    const percent = answerClaim({ form: 'deflection', window, amount: 1, unit: '%' }, firstSight)
    expect(percent.number).toBeCloseTo((100 * (row?.change as number)) / Math.max(...before.map(Math.abs)), 10)
  })
})

describe('from outside', () => {
  test('is what the trace-back by moment does not find in the window, for random chains and waveforms', () => {
    let compared = 0
    fc.assert(
      fc.property(settings, (setting) => {
        const { timesMs, baseline } = setting
        const { chain, before, after, source, extent } = claimed(setting)
        const window = setting.measure.mean
        const score = { kind: 'mean' as const, ...window, polarity: 'positive' as const }
        const traced = tracedWeights({ score, of: 'after', baseline, timesMs, before, after })
        if (!isTraced(traced)) throw new Error('a mean has a value')
        const trace = traceByMoment({ chain, extent, timesMs, baseline, source, traced })
        const answer = answerClaim({ form: 'from-outside', window, percent: 50 }, setting)
        if (trace.aboutZero) {
          expect(answer.grounds.kind).toBe('about zero')
          return
        }
        const first = timesMs.indexOf(window.fromMs)
        const last = timesMs.indexOf(window.toMs)
        const stretches = [first, last + 1]
          .filter((sample) => sample > 0 && sample < timesMs.length)
          .map((sample) => ({ sample, atMs: timesMs[sample] }))
        const rows = momentRows(trace, stretches)
        const inside = rows.find(({ from, to }) => from === first && to === last + 1)
        if (!inside) throw new Error('the window is no row')
        const outside = rows.filter((row) => row !== inside).reduce((sum, { share }) => sum + share, 0)
        const tolerance = (1e-9 * (100 * trace.absoluteSum)) / Math.abs(trace.value)
        expect(Math.abs((answer.number as number) - (100 * outside) / trace.value)).toBeLessThan(tolerance)
        compared++
      }),
      { numRuns: 60 },
    )
    expect(compared).toBeGreaterThan(30)
  })

  test('is nothing without a filter or a baseline', () => {
    const setting = built([gaussian(5, 100, 100)], { chain: [], baseline: 'none' })
    const answer = answerClaim({ form: 'from-outside', window: early, percent: 50 }, setting)
    expect(answer).toMatchObject({ verdict: 'does not hold', number: 0 })
  })
})

describe('an effect', () => {
  // two conditions that differ late by 10 µV, and nothing early
  const two = (chain: StageSpec[], more: Partial<ClaimSetting> = {}): ClaimSetting => ({
    ...firstSight,
    baseline: 'none',
    chain,
    conditions: [
      { name: 'a', source: { kind: 'built', components: [gaussian(12, 500, 200)] } },
      { name: 'b', source: { kind: 'built', components: [gaussian(2, 500, 200)] } },
    ],
    ...more,
  })
  const effect = (says: string, window: { fromMs: number; toMs: number }, leastUv = 0.5) =>
    ({ form: 'effect', first: 'a', second: 'b', window, says, leastUv }) as AnsweredForm
  const late = { fromMs: 450, toMs: 550 }
  const before = { fromMs: 100, toMs: 200 }

  test('that only the filter makes is absent without it, and does not exist without it', () => {
    expect(answerClaim(effect('is absent without the filter', before), two([highPass(1)])).verdict).toBe('holds')
    expect(answerClaim(effect('exists without the filter', before), two([highPass(1)])).verdict).toBe('does not hold')
  })

  test('that is there before exists without the filter, and is not absent without it', () => {
    expect(answerClaim(effect('exists without the filter', late), two([highPass(1)])).verdict).toBe('holds')
    const absent = answerClaim(effect('is absent without the filter', late), two([highPass(1)]))
    expect(absent.verdict).toBe('does not hold')
    expect(absent.number).toBe(named(absent, 'before'))
  })

  test('that is neither before nor after is not absent without the filter alone', () => {
    const answer = answerClaim(effect('is absent without the filter', before), two([]))
    expect(answer.verdict).toBe('does not hold')
  })

  test('changes sign only where both sides are there', () => {
    const parts = { fromMs: 300, toMs: 330 }
    // the flank is +1.2 µV; a high-pass bends it below zero
    const answer = answerClaim(effect('changes sign', parts, 0.3), two([highPass(1.5)]))
    expect(named(answer, 'before')).toBeGreaterThan(0.3)
    expect(named(answer, 'after')).toBeLessThan(-0.3)
    expect(answer.verdict).toBe('holds')
    expect(answerClaim(effect('changes sign', parts, 2), two([highPass(1.5)])).verdict).toBe('does not hold')
    expect(answerClaim(effect('changes sign', late, 0.3), two([highPass(0.1)])).verdict).toBe('does not hold')
  })
})

describe('attenuation', () => {
  const db = (hz: number, chain: StageSpec[], samplingRateHz = 500) =>
    answerClaim({ form: 'attenuation', hz, db: 3 }, { ...firstSight, chain, samplingRateHz })

  test('of a Butterworth at its half-power point is 3.0103 dB, at its half-amplitude point 6.0206', () => {
    for (const order of [1, 4, 12]) expect(db(30, [lowPass(30, order)]).number).toBeCloseTo(10 * Math.log10(2), 6)
    expect(db(1, [highPass(1)]).number).toBeCloseTo(20 * Math.log10(2), 6)
  })

  test('is SciPy’s gain in dB, for every design', () => {
    const file = new URL('../../reference/responses.json', import.meta.url)
    interface Case {
      samplingRateHz: number
      spec: StageSpec
      hz: number[]
      re: number[]
      im: number[]
    }
    const { cases } = JSON.parse(readFileSync(file, 'utf8')) as { cases: Case[] }
    let compared = 0
    for (const { samplingRateHz, spec, hz, re, im } of cases.filter((_, i) => i % 7 === 0)) {
      if ('delay' in spec && spec.delay === 'minimum-phase') continue
      hz.forEach((at, k) => {
        const gain = Math.hypot(re[k], im[k])
        // the reference holds to 1e-9 of the largest gain
        if (gain < 1e-4) return
        compared++
        expect(db(at, [spec], samplingRateHz).number).toBeCloseTo(-20 * Math.log10(gain), 4)
      })
    }
    expect(compared).toBeGreaterThan(100)
  })

  test('of an exact null is a finite number, and enough for any claim', () => {
    const answer = answerClaim({ form: 'attenuation', hz: 0, db: 200 }, { ...firstSight, chain: [highPass(1)] })
    expect(answer).toMatchObject({ verdict: 'holds', number: 300 })
  })

  test('counts only what is applied here', () => {
    expect(db(1, [{ ...highPass(1), inData: true }]).number).toBe(0)
    expect(db(1, [{ ...highPass(1), enabled: false }]).number).toBe(0)
    expect(Object.is(db(1, []).number, 0)).toBe(true)
  })

  test('is refused above half the sampling rate', () => {
    expect(() => db(251, [])).toThrow(RangeError)
  })
})

describe('a tone', () => {
  const tone = (locked: boolean, belowUv: number): AnsweredForm => ({
    form: 'tone',
    hz: 30,
    amplitudeUv: 8,
    belowUv,
    locked,
  })
  const setting = { ...firstSight, chain: [lowPass(30)], trials: 16 }

  test('locked to the event keeps its amplitude times the gain', () => {
    expect(answerClaim(tone(true, 5), setting).number).toBeCloseTo(8 * Math.SQRT1_2, 6)
    expect(answerClaim(tone(true, 5.7), setting).verdict).toBe('holds')
    expect(answerClaim(tone(true, 5.6), setting).verdict).toBe('does not hold')
  })

  test('of random phase falls with the root of the trials', () => {
    expect(answerClaim(tone(false, 5), setting).number).toBeCloseTo((8 * Math.SQRT1_2) / 4, 6)
  })
})

describe('twins and meanings', () => {
  const shows = { form: 'deflection', window: early, amount: 1, unit: 'µV' } as const

  test('a stage that has no twin, or is its own, leaves nothing to compare', () => {
    const amplifier = firstSight.chain[0]
    for (const chain of [[], [amplifier], [{ ...highPass(1), enabled: false }], [{ ...highPass(1), inData: true }]])
      expect(answerClaim({ form: 'twin', twin: 'causal', shows }, { ...firstSight, chain }).grounds.kind).toBe(
        'no twin',
      )
    const forward = { ...highPass(1), direction: 'forward' } as StageSpec
    const own = answerClaim({ form: 'twin', twin: 'causal', shows }, { ...firstSight, chain: [forward] })
    expect(own).toMatchObject({ verdict: 'cannot be told', grounds: { kind: 'no twin' } })
    const other = answerClaim({ form: 'twin', twin: 'zero-phase', shows }, { ...firstSight, chain: [forward] })
    expect(other.grounds.kind).toBe('not shown')
  })

  test('a filter that does not show it has nothing that its twin would not show', () => {
    const answer = answerClaim({ form: 'twin', twin: 'causal', shows }, { ...firstSight, chain: withHighPass(0.1) })
    expect(answer).toMatchObject({ verdict: 'does not hold', grounds: { kind: 'not shown' } })
  })

  test('half-amplitude read as half-power gives the conclusion of the chain stated so', () => {
    const form: AnsweredForm = { form: 'meaning', stated: 'half-amplitude', other: 'half-power', conclusion: shows }
    const chain = withHighPass(0.75)
    const asPower = chain.map((spec) => ('meaning' in spec ? { ...spec, meaning: 'half-power' } : spec)) as StageSpec[]
    const answer = answerClaim(form, { ...firstSight, chain })
    const amplitude = answerClaim(shows, { ...firstSight, chain })
    const power = answerClaim(shows, { ...firstSight, chain: asPower })
    expect(answer.grounds).toMatchObject({ kind: 'compared', present: amplitude, compared: power })
    expect([amplitude.verdict, power.verdict]).toEqual(['holds', 'does not hold'])
    expect(answer.verdict).toBe('does not hold')
    // a chain that is stated in another meaning is read as if it had been stated so
    expect(answerClaim(form, { ...firstSight, chain: asPower })).toMatchObject({ verdict: 'does not hold' })
  })

  test('a chain without a cutoff that means anything cannot be read in two ways', () => {
    const chain: StageSpec[] = [{ design: 'moving-average', durationMs: 20, delay: 'compensated' }]
    const form: AnsweredForm = { form: 'meaning', stated: 'half-amplitude', other: 'half-power', conclusion: shows }
    expect(answerClaim(form, { ...firstSight, chain }).grounds).toEqual({ kind: 'no meaning' })
  })
})

describe('cannot be told', () => {
  const deflection: AnsweredForm = { form: 'deflection', window: early, amount: 1, unit: 'µV' }
  const change: AnsweredForm = { form: 'change', row: 'score', relation: 'at least', amount: 1, unit: 'own' }

  test('where the unfiltered waveform has a deflection already, the filter has not made it', () => {
    const setting = built([gaussian(8, 110, 60)], { chain: [highPass(2)] })
    expect(answerClaim(deflection, setting)).toMatchObject({
      verdict: 'does not hold',
      grounds: { kind: 'already there' },
    })
  })

  test('within the noise of a few trials, settled by as many as it says', () => {
    const setting: ClaimSetting = { ...firstSight, taken: 'as measured', trials: 10 }
    const answer = answerClaim(change, setting)
    if (answer.grounds.kind !== 'within noise' || answer.grounds.trialsNeeded === null) throw new Error('not in noise')
    const needed = answer.grounds.trialsNeeded
    expect(needed).toBeGreaterThan(10)
    expect(answerClaim(change, { ...setting, trials: needed }).verdict).toBe('holds')
    expect(answerClaim(change, { ...setting, trials: needed - 1 }).verdict).toBe('cannot be told')
  })

  test('where too much of the weight lies outside a recorded epoch, but only for what hangs on it', () => {
    const values = claimed(firstSight).before
    const setting = recorded(values, { chain: [highPass(0.1)], trials: 1e9, unseenThreshold: 0.01 })
    const answer = answerClaim(change, setting)
    expect(answer.verdict).toBe('cannot be told')
    expect(answer.grounds).toMatchObject({ kind: 'unseen', threshold: 0.01 })
    expect(answer.number).not.toBeNull()
    expect(answerClaim(change, { ...setting, unseenThreshold: 1 }).grounds.kind).toBe('number')
    expect(answerClaim({ form: 'attenuation', hz: 50, db: 3 }, setting).grounds.kind).toBe('number')
  })

  test('of the unfiltered waveform where a recording was filtered before and nobody knows how', () => {
    const setting = recorded(claimed(firstSight).before, {
      chain: [highPass(1)],
      filteredBefore: 'not known',
      trials: 1e9,
      unseenThreshold: 1,
      conditions: ['rare', 'frequent'].map((name, i) => ({
        name,
        source: { kind: 'recorded', values: claimed(firstSight).before.map((x) => x / (i + 1)) },
      })),
      chosen: { kind: 'condition', name: 'rare' },
    })
    const unknown: AnsweredForm[] = [
      deflection,
      { form: 'from-outside', window: early, percent: 50 },
      { form: 'effect', first: 'rare', second: 'frequent', window: early, says: 'changes sign', leastUv: 1 },
      { form: 'twin', twin: 'causal', shows: deflection as never },
      { form: 'meaning', stated: 'half-amplitude', other: 'half-power', conclusion: deflection as never },
    ]
    for (const form of unknown) expect(answerClaim(form, setting).grounds).toEqual({ kind: 'filtered before' })
    const others: AnsweredForm[] = [
      change,
      { form: 'onset', direction: 'later', ms: 5 },
      { form: 'attenuation', hz: 50, db: 3 },
      { form: 'twin', twin: 'causal', shows: change as never },
    ]
    for (const form of others) expect(answerClaim(form, setting).grounds.kind).not.toBe('filtered before')
    // a built waveform is what it is
    expect(answerClaim(deflection, { ...firstSight, filteredBefore: 'not known' }).verdict).toBe('holds')
  })

  test('where there is no peak, area or onset', () => {
    const setting = built([gaussian(-5, 400, 200)], { chain: [highPass(1)] })
    const row = (id: ClaimRow) =>
      answerClaim(
        { form: 'change', row: id, relation: 'at least', amount: 1, unit: 'own' },
        {
          ...setting,
          measure: { ...setting.measure, peak: { fromMs: 300, toMs: 350 } },
          baseline: 'none',
        },
      )
    expect(row('peak-latency').grounds).toEqual({ kind: 'no value', missing: 'no peak', where: 'before' })
    expect(row('area-latency').grounds).toEqual({ kind: 'no value', missing: 'no area', where: 'before' })
    const up = built(
      [
        { shape: 'slow-wave', name: 'up', amplitudeUv: 5, latencyMs: 200, widthMs: 4000, edgeMs: 100 },
        gaussian(1, 400, 100),
      ],
      {
        chain: [],
        baseline: 'none',
      },
    )
    expect(answerClaim({ form: 'onset', direction: 'earlier', ms: 1 }, up)).toMatchObject({
      verdict: 'cannot be told',
      number: null,
      grounds: { kind: 'no value', missing: 'no onset', where: 'before' },
    })
  })

  test('of a share of a value that is about zero, and of per cent of a waveform that is zero', () => {
    const nothing = built([gaussian(0, 400, 200)], { chain: [highPass(1)] })
    expect(answerClaim({ form: 'from-outside', window: early, percent: 50 }, nothing).grounds.kind).toBe('about zero')
    const percent: AnsweredForm[] = [
      { form: 'change', row: 'score', relation: 'at least', amount: 10, unit: '%' },
      { form: 'deflection', window: early, amount: 10, unit: '%' },
    ]
    for (const form of percent) expect(answerClaim(form, nothing).grounds.kind).toBe('about zero')
  })
})

test('claims that cannot be are refused with what, rule and value', () => {
  const bad: AnsweredForm[] = [
    { form: 'change', row: 'score', relation: 'at least', amount: -1, unit: 'own' },
    { form: 'change', row: 'peak-latency', relation: 'at least', amount: 1, unit: '%' },
    { form: 'deflection', window: { fromMs: 5000, toMs: 6000 }, amount: 1, unit: 'µV' },
    { form: 'effect', first: 'no such', second: 'frequent standards', window: early, says: 'changes sign', leastUv: 1 },
    { form: 'tone', hz: 50, amplitudeUv: -1, belowUv: 1, locked: true },
  ]
  for (const form of bad) expect(() => answerClaim(form, firstSight)).toThrow(RangeError)
})

test('the bounds of a claim are the numbers at which its verdict turns', () => {
  const bound = (amount: number): AnsweredForm => ({
    form: 'change',
    row: 'score',
    relation: 'at least',
    amount,
    unit: 'own',
  })
  const number = Math.abs(answerClaim(bound(1), firstSight).number as number)
  expect(claimBounds(bound(number))).toEqual([-number, number])
  expect(answerClaim(bound(number * 0.999), firstSight).verdict).toBe('holds')
  expect(answerClaim(bound(number * 1.001), firstSight).verdict).toBe('does not hold')
})
