import { describe, expect, test } from 'vitest'
import { correctBaseline } from '../../../src/erp/baseline.ts'
import { type Score, scoreOf, scoreWeights } from '../../../src/erp/score.ts'
import { seededRandom } from '../../../src/erp/seeded-random.ts'
import { drawNoise, noiseSource } from '../../../src/erp/simulate-noise.ts'
import { type AnsweredForm, answerClaim } from '../../../src/evidence/claims/answer-claim.ts'
import { fieller } from '../../../src/evidence/claims/change-claim.ts'
import { linearNoise, simulatedNoise, termAfter, termBefore } from '../../../src/evidence/claims/claim-noise.ts'
import type { ClaimSetting } from '../../../src/evidence/claims/claim.ts'
import { claimChain, claimedWaveform, prepareClaim } from '../../../src/evidence/claims/claimed-waveform.ts'
import { applyEpochs } from '../../../src/filter/apply-chain.ts'
import { appliedStages, designChain } from '../../../src/filter/chain.ts'
import type { StageSpec } from '../../../src/filter/stage.ts'
import { firstSight, highPass, lowPass, recorded } from './claim-settings.ts'

const measured: ClaimSetting = { ...firstSight, taken: 'as measured' }
const change = (row: 'score' | 'mean-amplitude', amount: number, unit: 'own' | '%' = 'own'): AnsweredForm => ({
  form: 'change',
  row,
  relation: 'at least',
  amount,
  unit,
})
const prepare = (setting: ClaimSetting, draws = 300) => {
  const prepared = prepareClaim(setting, draws)
  return { prepared, claimed: claimedWaveform(prepared, setting.chosen, claimChain(prepared, setting.chain)) }
}
const sdOf = (values: readonly number[]) => {
  const mean = values.reduce((sum, value) => sum + value, 0) / values.length
  return Math.sqrt(values.reduce((sum, value) => sum + (value - mean) ** 2, 0) / (values.length - 1))
}
const unfiltered = prepare(firstSight).claimed.before

describe('the interval of a claim’s number', () => {
  test('is none where the waveform is taken as it stands, and there for a recorded one all the same', () => {
    expect(answerClaim(change('score', 1), firstSight).interval).toBeNull()
    expect(answerClaim(change('score', 1), recorded(unfiltered)).interval).not.toBeNull()
  })

  test('covers 95 of 100 drawn averages of a recorded waveform', () => {
    const chain: StageSpec[] = [highPass(1), lowPass(30)]
    const { score, timesMs, baseline, noise, trials } = firstSight
    const clean = recorded(unfiltered, { chain, unseenThreshold: 1 })
    const truth = answerClaim(change('score', 1), clean).number as number
    const source = noiseSource(noise, 500, timesMs.length)
    const stages = appliedStages(designChain(chain, 500))
    const random = seededRandom(20)
    const { interval } = answerClaim(change('score', 1), clean)
    const half = ((interval?.[1] as number) - (interval?.[0] as number)) / 2
    let covered = 0
    const numbers: number[] = []
    for (let pair = 0; pair < 500; pair++) {
      for (const drawn of drawNoise(source, random, trials)) {
        // by hand: an average with noise on it, filtered on its epoch, scored
        const noisy = drawn.map((value, i) => value + unfiltered[i])
        const before = scoreOf(correctBaseline(noisy, timesMs, baseline), timesMs, score) as number
        const after = scoreOf(correctBaseline(applyEpochs(stages, noisy), timesMs, baseline), timesMs, score) as number
        numbers.push(after - before)
        if (Math.abs(after - before - truth) <= half) covered++
      }
    }
    // of 1000 draws a share of 95 % has a standard error of 0.7 %, an SD one of 2.2 %
    expect(covered / 1000).toBeGreaterThan(0.93)
    expect(covered / 1000).toBeLessThan(0.97)
    expect(sdOf(numbers) / (half / 1.96)).toBeCloseTo(1, 0.8)
  })

  test('is wider by √2 for a difference of two conditions, and narrower with the root of the trials', () => {
    const width = (setting: ClaimSetting) => {
      const { interval } = answerClaim(change('score', 1), setting)
      return (interval?.[1] as number) - (interval?.[0] as number)
    }
    const one = width(measured)
    const two = width({
      ...measured,
      chosen: { kind: 'difference', first: 'rare targets', second: 'frequent standards' },
    })
    expect(two / one).toBeCloseTo(Math.SQRT2, 9)
    expect(width({ ...measured, trials: 160 }) / one).toBeCloseTo(0.5, 9)
  })

  test('knows that a stage in the data has filtered a model’s noise, but not an estimate’s', () => {
    const chain: StageSpec[] = [{ ...highPass(2), inData: true }, highPass(1)]
    const setting = recorded(unfiltered, { chain, unseenThreshold: 1 })
    const width = (more: Partial<ClaimSetting>) => {
      const { interval } = answerClaim(change('score', 1), { ...setting, ...more })
      return (interval?.[1] as number) - (interval?.[0] as number)
    }
    // what 1 Hz takes out is slow, and 2 Hz has taken most of it away before
    expect(width({ noisePassed: 'nothing' })).toBeLessThan(0.5 * width({ noisePassed: 'the stages in the data' }))
    expect(width({ noisePassed: 'the stages in the data' })).toBeCloseTo(width({ chain: [highPass(1)] }), 9)
  })

  test('of a ratio is Fieller’s: it leaves out a ratio just where the linear combination is told', () => {
    for (const amount of [34, 36, 38, 40, 58, 59, 60, 62]) {
      const answer = answerClaim(change('mean-amplitude', amount, '%'), measured)
      const [low, high] = answer.interval as [number, number]
      expect(answer.verdict === 'cannot be told').toBe(-amount > low && -amount < high)
    }
  })
})

describe('fieller', () => {
  test('is ± 1.96 SD of the numerator where the denominator is exact', () => {
    const [low, high] = fieller(3, 2, [
      [0.04, 0],
      [0, 0],
    ]) as [number, number]
    expect(low).toBeCloseTo((3 - 1.959964 * 0.2) / 2, 6)
    expect(high).toBeCloseTo((3 + 1.959964 * 0.2) / 2, 6)
  })

  test('is none where the denominator cannot be told from 0', () => {
    expect(
      fieller(3, 0.1, [
        [0.04, 0],
        [0, 0.04],
      ]),
    ).toBeNull()
  })
})

describe('simulated noise', () => {
  const score: Score = { kind: 'mean', fromMs: 300, toMs: 500, polarity: 'positive' }

  for (const [what, setting] of [
    ['on a continuous recording with an amplifier', measured],
    ['on an epoch', recorded(unfiltered, { chain: [highPass(0.5), lowPass(20)] })],
    ['on an epoch after an amplifier that is applied here', { ...measured, extent: 'epochs' as const }],
  ] as const) {
    test(`of a change of a mean is what the weights give exactly, ${what}`, () => {
      const { prepared, claimed } = prepare(setting, 1200)
      const { timesMs, baseline } = setting
      const w = scoreWeights(score, baseline, timesMs)
      const exact = linearNoise(prepared, claimed, () => [
        termAfter(prepared, claimed, w),
        termBefore(prepared, claimed, w, -1),
      ])
      const drawn = simulatedNoise(
        prepared,
        claimed,
        (x, y) => (scoreOf(y, timesMs, score) as number) - (scoreOf(x, timesMs, score) as number),
      )
      if (drawn === null || drawn === 'missing' || exact === null) throw new Error('there is noise')
      // 1200 draws have a standard error of 2 %
      expect(Math.abs(drawn.sd / exact.sd - 1)).toBeLessThan(0.07)
    })
  }

  test('of a peak’s latency is that of peaks in averages drawn one by one', () => {
    const chain: StageSpec[] = [lowPass(10)]
    const setting = recorded(unfiltered, { chain, trials: 200, unseenThreshold: 1 })
    const peak: Score = { kind: 'peak-latency', ...setting.measure.peak, polarity: 'positive' }
    const { timesMs, baseline, noise } = setting
    const source = noiseSource(noise, 500, timesMs.length)
    const stages = appliedStages(designChain(chain, 500))
    const random = seededRandom(5)
    const shifts: number[] = []
    for (let pair = 0; pair < 300; pair++) {
      for (const drawn of drawNoise(source, random, 200)) {
        const noisy = drawn.map((value, i) => value + unfiltered[i])
        const before = scoreOf(correctBaseline(noisy, timesMs, baseline), timesMs, peak)
        const after = scoreOf(correctBaseline(applyEpochs(stages, noisy), timesMs, baseline), timesMs, peak)
        if (typeof before === 'number' && typeof after === 'number') shifts.push(after - before)
      }
    }
    const form: AnsweredForm = { form: 'change', row: 'peak-latency', relation: 'at least', amount: 5, unit: 'own' }
    const { interval } = answerClaim(form, setting)
    const sd = ((interval?.[1] as number) - (interval?.[0] as number)) / 2 / 1.96
    // 300 and 600 draws of a latency with long tails
    expect(Math.abs(sd / sdOf(shifts) - 1)).toBeLessThan(0.15)
  })

  test('of an onset that many draws do not have settles nothing, whatever the trials', () => {
    // with noise on it the peak lies outside so narrow a window more often than not
    const narrow = { ...measured.measure, peak: { fromMs: 390, toMs: 410 } }
    const setting: ClaimSetting = { ...measured, measure: narrow, chain: [lowPass(30)] }
    const answer = answerClaim({ form: 'onset', direction: 'later', ms: 5 }, setting)
    expect(answer).toMatchObject({
      verdict: 'cannot be told',
      interval: null,
      grounds: { kind: 'within noise', trialsNeeded: null },
    })
    expect(answer.number).not.toBeNull()
  })
})
