import { describe, expect, test } from 'vitest'
import { type AnsweredForm, answerClaim } from '../../../src/evidence/claims/answer-claim.ts'
import { claimCurve } from '../../../src/evidence/claims/claim-curve.ts'
import type { ClaimCurve, ClaimSetting, ClaimVerdict, Varied } from '../../../src/evidence/claims/claim.ts'
import { variedByDefault, variedChain } from '../../../src/evidence/claims/varied-chain.ts'
import { gainAt } from '../../../src/filter/stage-response.ts'
import { designStage, type StageSpec } from '../../../src/filter/stage.ts'
import { built, firstSight, gaussian, highPass, lowPass, recorded, whole, wholeCurve } from './claim-settings.ts'

const early = { fromMs: 80, toMs: 140 }
const cutoffOf = (stage: number): Varied => ({ stage, what: 'cutoff', cutoff: 0 })

/** Flips on a fine grid, each by the answer itself. */
function bruteForce(
  form: AnsweredForm,
  setting: ClaimSetting,
  varied: Varied,
  from: number,
  to: number,
  count: number,
) {
  const flips: { low: number; high: number; below: ClaimVerdict; above: ClaimVerdict }[] = []
  let last: { at: number; verdict: ClaimVerdict } | null = null
  for (let i = 0; i < count; i++) {
    const at = from * (to / from) ** (i / (count - 1))
    let verdict: ClaimVerdict | null
    try {
      verdict = answerClaim(form, { ...setting, chain: variedChain(setting.chain, varied, at) }).verdict
    } catch (error) {
      if (!(error instanceof RangeError)) throw error
      verdict = null
    }
    if (last !== null && verdict !== null && verdict !== last.verdict)
      flips.push({ low: last.at, high: at, below: last.verdict, above: verdict })
    last = verdict === null ? null : { at, verdict }
  }
  return flips
}

function expectSameFlips({ flips }: ClaimCurve, expected: ReturnType<typeof bruteForce>) {
  expect(flips.map(({ below, above }) => [below, above])).toEqual(expected.map(({ below, above }) => [below, above]))
  flips.forEach(({ at }, i) => {
    expect(at).toBeGreaterThanOrEqual(expected[i].low * (1 - 1e-4))
    expect(at).toBeLessThanOrEqual(expected[i].high * (1 + 1e-4))
  })
}

describe('the pulse of 10 µV at 400 ms, SD 80 ms, through a zero-phase high-pass', () => {
  // computed apart, with long zero padding: value at 80 ms −0.434, −1.147, −1.535, −1.323, −0.010 µV at 0.1, 0.3, 0.5, 1, 2 Hz
  const widthMs = 2 * Math.sqrt(2 * Math.log(2)) * 80
  const setting = built([gaussian(10, 400, widthMs)], {
    chain: [highPass(0.5)],
    baseline: 'none',
    score: { kind: 'moment', fromMs: 80, toMs: 80, polarity: 'negative' },
  })
  const form: AnsweredForm = { form: 'change', row: 'score', relation: 'at least', amount: 1.2, unit: 'own' }
  const curve = wholeCurve(claimCurve(form, setting, null))

  test('changes by what was computed apart', () => {
    for (const [hz, uv] of [
      [0.1, -0.434],
      [0.3, -1.147],
      [0.5, -1.535],
      [1, -1.323],
      [2, -0.01],
    ]) {
      const chain = [highPass(hz)]
      // the pulse itself holds 0.003 µV at 80 ms
      expect(Math.abs((answerClaim(form, { ...setting, chain }).number as number) - uv)).toBeLessThan(0.005)
    }
  })

  test('is not monotonic in the cutoff: at 80 ms the claim holds in between and neither below nor above', () => {
    expect(curve.flips.map(({ below, above }) => [below, above])).toEqual([
      ['does not hold', 'holds'],
      ['holds', 'does not hold'],
    ])
    const [low, high] = curve.flips.map(({ at }) => at)
    expect(low).toBeGreaterThan(0.3)
    expect(low).toBeLessThan(0.5)
    expect(high).toBeGreaterThan(1)
    expect(high).toBeLessThan(2)
  })

  test('each flip is where the number meets the amount', () => {
    for (const { at } of curve.flips) {
      const there = answerClaim(form, { ...setting, chain: [highPass(at)] }).number as number
      expect(Math.abs(there)).toBeCloseTo(1.2, 3)
    }
  })

  test('a claim that just touches its amount between two points of the grid flips twice', () => {
    const at = (hz: number) => Math.abs(answerClaim(form, { ...setting, chain: [highPass(hz)] }).number as number)
    let top = 0
    let where = 0
    for (let hz = 0.4; hz < 0.9; hz *= 1.0005) {
      if (at(hz) <= top) continue
      top = at(hz)
      where = hz
    }
    // so little below the top that the claim holds over a tenth of a grid step only
    const touching: AnsweredForm = {
      ...form,
      amount: Math.min(top - 1e-6, (at(where * 1.008) + at(where / 1.008)) / 2),
    }
    const found = wholeCurve(claimCurve(touching, { ...setting, chain: [highPass(0.02)] }, null))
    expect(found.flips.map(({ above }) => above)).toEqual(['holds', 'does not hold'])
    expect(found.flips[0].at).toBeLessThan(where)
    expect(found.flips[1].at).toBeGreaterThan(where)
    expect(found.flips[1].at / found.flips[0].at).toBeLessThan(1.05)
  })

  test('a number that goes from beyond one bound to beyond the other between two points of the grid flips twice', () => {
    // at 80 ms it goes through 0 near 2 Hz, and is smaller than this over a tenth of a grid step only
    const little: AnsweredForm = { ...form, amount: 0.02 }
    const close = bruteForce(little, setting, cutoffOf(0), 1.8, 2.3, 400)
    expect(close.map(({ above }) => above)).toEqual(['does not hold', 'holds'])
    expect(close[1].high / close[0].low).toBeLessThan(1.06)
    const between = ({ flips }: ClaimCurve) => flips.filter(({ at }) => at > 1.8 && at < 2.3)
    for (const present of [0.5, 0.02, 7]) {
      const found = wholeCurve(claimCurve(little, { ...setting, chain: [highPass(present)] }, null))
      expectSameFlips({ ...found, flips: between(found) }, close)
    }
  })
})

describe('every flip of a fine grid is found, and no other', () => {
  const cases: [string, AnsweredForm, ClaimSetting][] = [
    ['a deflection', { form: 'deflection', window: early, amount: 0.8, unit: 'µV' }, firstSight],
    [
      'a change in per cent',
      { form: 'change', row: 'mean-amplitude', relation: 'at most', amount: 10, unit: '%' },
      firstSight,
    ],
    ['a share from outside', { form: 'from-outside', window: early, percent: 50 }, firstSight],
    [
      'an effect that changes sign',
      {
        form: 'effect',
        first: 'rare targets',
        second: 'frequent standards',
        window: { fromMs: 200, toMs: 240 },
        says: 'changes sign',
        leastUv: 0.4,
      },
      firstSight,
    ],
    ['an onset', { form: 'onset', direction: 'later', ms: 20 }, firstSight],
    ['a tone', { form: 'tone', hz: 2, amplitudeUv: 5, belowUv: 1, locked: true }, firstSight],
    [
      'a causal twin',
      { form: 'twin', twin: 'causal', shows: { form: 'deflection', window: early, amount: 0.8, unit: 'µV' } },
      firstSight,
    ],
    [
      'another meaning',
      {
        form: 'meaning',
        stated: 'half-amplitude',
        other: 'half-power',
        conclusion: { form: 'deflection', window: early, amount: 0.8, unit: 'µV' },
      },
      firstSight,
    ],
    [
      'a change under noise',
      { form: 'change', row: 'mean-amplitude', relation: 'at least', amount: 2, unit: 'own' },
      { ...firstSight, taken: 'as measured' },
    ],
  ]
  for (const [what, form, setting] of cases) {
    test(what, () => {
      const curve = wholeCurve(claimCurve(form, setting, null))
      expect(curve.varied).toEqual(cutoffOf(1))
      expect(curve.flips.length).toBeGreaterThan(0)
      expectSameFlips(curve, bruteForce(form, setting, curve.varied, 0.01, 225, 500))
    })
  }
})

describe('a curve', () => {
  const form: AnsweredForm = { form: 'deflection', window: early, amount: 0.8, unit: 'µV' }

  test('holds the chain as it stands, ascends, and agrees with the answer at every point', () => {
    const curve = wholeCurve(claimCurve(form, firstSight, null))
    expect(curve.present).toBe(1)
    expect(curve.points.length).toBeGreaterThan(80)
    const at = curve.points.map((point) => point.at)
    expect(at).toContain(1)
    expect([...at].sort((a, b) => a - b)).toEqual(at)
    expect(at[0]).toBeCloseTo(0.01, 12)
    expect(at[at.length - 1]).toBeCloseTo(225, 9)
    for (const point of curve.points.filter((_, i) => i % 9 === 0)) {
      const chain = variedChain(firstSight.chain, curve.varied, point.at)
      expect(answerClaim(form, { ...firstSight, chain })).toMatchObject({
        number: point.number,
        verdict: point.verdict,
      })
    }
    const turns = curve.points.slice(1).filter((point, i) => point.verdict !== curve.points[i].verdict)
    expect(turns.length).toBe(curve.flips.length)
  })

  test('over orders takes all of them, and a flip stands at the first on its other side', () => {
    const attenuation: AnsweredForm = { form: 'attenuation', hz: 60, db: 40 }
    const setting = { ...firstSight, chain: [lowPass(30, 2)] }
    const curve = wholeCurve(claimCurve(attenuation, setting, { stage: 0, what: 'order', cutoff: 0 }))
    expect(curve.unit).toBeNull()
    expect(curve.points.map(({ at }) => at)).toEqual([1, 2, 3, 4, 5, 6, 7, 8, 9, 10, 11, 12])
    const first = [1, 2, 3, 4, 5, 6, 7, 8].find(
      (order) => -20 * Math.log10(gainAt([designStage(lowPass(30, order), 500)], 60)) >= 40,
    )
    expect(curve.flips).toEqual([{ at: first, below: 'does not hold', above: 'holds' }])
    const band: StageSpec = { ...lowPass(30), pass: 'band', cutoffsHz: [1, 30] } as StageSpec
    const bands = wholeCurve(
      claimCurve(attenuation, { ...firstSight, chain: [band] }, { stage: 0, what: 'order', cutoff: 0 }),
    )
    expect(bands.points.length).toBe(8)
  })

  test('of a band keeps to the side of its other edge', () => {
    const band = { ...lowPass(30), pass: 'band', cutoffsHz: [1, 30] } as StageSpec
    const attenuation: AnsweredForm = { form: 'attenuation', hz: 0.5, db: 6 }
    const ends = (cutoff: 0 | 1) => {
      const { points } = wholeCurve(
        claimCurve(attenuation, { ...firstSight, chain: [band] }, { stage: 0, what: 'cutoff', cutoff }),
      )
      return [points[0].at, points[points.length - 1].at]
    }
    expect(ends(0)[0]).toBeCloseTo(0.01, 12)
    expect(ends(0)[1]).toBeLessThan(30)
    expect(ends(1)[0]).toBeGreaterThan(1)
    expect(ends(1)[1]).toBeCloseTo(225, 9)
  })

  test('over a transition width has no number where the filter cannot be realised', () => {
    const setting = { ...firstSight, chain: [firstSight.chain[2]] }
    const attenuation: AnsweredForm = { form: 'attenuation', hz: 40, db: 20 }
    const curve = wholeCurve(claimCurve(attenuation, setting, { stage: 0, what: 'transition', cutoff: 0 }))
    expect(curve.unit).toBe('Hz')
    const last = curve.points[curve.points.length - 1]
    expect(last).toMatchObject({ number: null, verdict: null })
    expect(curve.flips.length).toBeGreaterThan(0)
    // a Hamming window's stop band begins half a transition width above the cutoff
    expect(curve.flips[0].below).toBe('holds')
    expect(curve.flips[0].at).toBeGreaterThan(20)
  })

  test('is none where nothing can be varied', () => {
    const notch: StageSpec = { design: 'notch', frequencyHz: 50, bandwidthHz: 2, harmonics: 0, direction: 'both' }
    expect(whole(claimCurve(form, { ...firstSight, chain: [notch] }, null))).toBeNull()
    expect(whole(claimCurve(form, firstSight, cutoffOf(9)))).toBeNull()
    const off = firstSight.chain.map((spec) => ({ ...spec, enabled: false }))
    expect(whole(claimCurve(form, { ...firstSight, chain: off }, cutoffOf(1)))).toBeNull()
  })

  test('varies the first applied offline stage that has a cutoff', () => {
    expect(variedByDefault(firstSight.chain)).toEqual(cutoffOf(1))
    expect(variedByDefault([{ ...highPass(1), inData: true }, lowPass(30)])).toEqual(cutoffOf(1))
    expect(variedByDefault([])).toBeNull()
  })

  test('refuses what the answer refuses', () => {
    const bad: AnsweredForm = { form: 'attenuation', hz: 300, db: 3 }
    expect(() => whole(claimCurve(bad, firstSight, null))).toThrow(RangeError)
  })

  test('finds where too much becomes unseen', () => {
    const before = firstSight.timesMs.map((t) => 8 * Math.exp(-(((t - 400) / 130) ** 2)))
    const setting = recorded(before, { chain: [highPass(1)], trials: 1e9, unseenThreshold: 0.02 })
    const change: AnsweredForm = { form: 'change', row: 'score', relation: 'at least', amount: 0, unit: 'own' }
    const curve = wholeCurve(claimCurve(change, setting, null))
    expect(curve.flips.some(({ below, above }) => below !== above && [below, above].includes('cannot be told'))).toBe(
      true,
    )
    expectSameFlips(curve, bruteForce(change, setting, curve.varied, 0.01, 225, 400))
  })
})
