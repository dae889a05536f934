import { describe, expect, test } from 'vitest'
import { noiseDensity } from '../../../src/erp/noise.ts'
import { epochTimesMs } from '../../../src/erp/waveform.ts'
import {
  lateOnlyClaim,
  lateOnlyCurve,
  noiseBefore,
  variedByDefaultOfFit,
} from '../../../src/evidence/claims/late-only-claim.ts'
import type { ClaimSetting, LateOnlyClaim } from '../../../src/evidence/claims/claim.ts'
import { claimChain, claimedWaveform, prepareClaim } from '../../../src/evidence/claims/claimed-waveform.ts'
import { robustVerdict } from '../../../src/evidence/robust-verdict.ts'
import { designChain, stagesResponse } from '../../../src/filter/chain.ts'
import type { StageSpec } from '../../../src/filter/stage.ts'
import { built, gaussian, highPass, recorded, wholeCurve } from './claim-settings.ts'

const form: LateOnlyClaim = { form: 'late-only', t0Ms: 200, early: { fromMs: 80, toMs: 140 }, slackMs: 30 }
const samplingRateHz = 125
const timesMs = epochTimesMs(samplingRateHz, { fromMs: -200, toMs: 800 })
const more = { samplingRateHz, timesMs, chain: [highPass(1)], trials: 100 }
/** Late activity alone: a ramp that begins at 220 ms. */
const late = {
  shape: 'ramp',
  name: 'late',
  amplitudeUv: 9,
  latencyMs: 400,
  widthMs: 180,
  riseShare: 0.5,
} as const
const onlyLate = built([late], more)
const andEarly = built([late, gaussian(-4, 110, 30)], more)
const inData = (chain: readonly StageSpec[]) => chain.map((spec) => ({ ...spec, inData: true }))

/** What a built setting's chain makes, as if it had been recorded so. */
function asRecorded(setting: ClaimSetting): ClaimSetting {
  const prepared = prepareClaim(setting)
  const { after } = claimedWaveform(prepared, setting.chosen, claimChain(prepared, setting.chain))
  return recorded(after, { ...more, extent: 'continuous', chain: inData(setting.chain) })
}

describe('lateOnlyClaim', () => {
  test('holds where late activity alone was put in', () => {
    const answer = lateOnlyClaim(form, onlyLate)
    expect(answer).toMatchObject({
      verdict: 'holds',
      grounds: { kind: 'late-only', verdict: 'it can', changed: false },
    })
    expect(Math.abs(answer.number as number)).toBeLessThan(0.3)
  })

  test('does not hold where an early component was put in, whose size it estimates', () => {
    const answer = lateOnlyClaim(form, andEarly)
    expect(answer).toMatchObject({ verdict: 'does not hold', grounds: { verdict: 'not by late activity alone' } })
    // the fit's own early component is a raised cosine of about that width, not a Gaussian
    expect(Math.abs((answer.number as number) + 4)).toBeLessThan(0.6)
    expect((answer.interval as [number, number])[1]).toBeLessThan(0)
  })

  test('does not hold of a causal filter, which can make nothing early', () => {
    const chain = [{ ...highPass(1), direction: 'forward' } as StageSpec]
    expect(lateOnlyClaim(form, { ...andEarly, chain }).verdict).toBe('does not hold')
    expect(lateOnlyClaim(form, { ...onlyLate, chain }).verdict).not.toBe('holds')
  })

  test('fits a recorded waveform as it is, by the stages in its data', () => {
    const setting = asRecorded(andEarly)
    const { source } = setting.conditions[0]
    const answer = lateOnlyClaim(form, setting)
    expect(Array.from(answer.fitted)).toEqual(Array.from(source.kind === 'recorded' ? source.values : []))
    expect(answer.number).toBeCloseTo(lateOnlyClaim(form, andEarly).number as number, 9)
  })

  test('takes a built waveform as measured with the noise of one simulated average, always the same', () => {
    const measured = { ...andEarly, taken: 'as measured' as const }
    const first = lateOnlyClaim(form, measured)
    expect(lateOnlyClaim(form, measured).fitted).toEqual(first.fitted)
    const { fitted: clean } = lateOnlyClaim(form, andEarly)
    const noise = first.fitted.map((value, i) => value - clean[i])
    const size = (values: Float64Array) => Math.sqrt(values.reduce((sum, value) => sum + value ** 2, 0) / values.length)
    expect(size(noise)).toBeGreaterThan(0.05)
    // four times the trials leave half of it, and the noise that is found is about the stated one
    const more = lateOnlyClaim(form, { ...measured, trials: 4 * measured.trials })
    expect(size(more.fitted.map((value, i) => value - clean[i])) / size(noise)).toBeCloseTo(0.5, 9)
    expect(first.robust.fit.noiseScale).toBeGreaterThan(0.3)
    expect(first.robust.fit.noiseScale).toBeLessThan(3)
    expect(lateOnlyClaim(form, andEarly).robust.fit.noiseScale).toBeLessThan(0.1)
  })

  test('is the robust verdict of the fit with the setting’s noise and trials', () => {
    const answer = lateOnlyClaim(form, onlyLate)
    const { t0Ms, early, slackMs } = form
    const { noise, trials, extent } = onlyLate
    const options = { timesMs, t0Ms, early, noise, trials, extent, onsetSlackMs: slackMs }
    const robust = robustVerdict(answer.fitted, designChain([highPass(1)], samplingRateHz), options)
    expect(answer.number).toBe(robust.fit.beta)
    expect(answer.interval).toEqual(robust.fit.interval)
    expect(answer.robust.verdict).toBe(robust.verdict)
    expect(answer.values.map(({ name }) => name)).toEqual(['early activity', 'late share', 'noise scale', 'alpha'])
  })
})

describe('noiseBefore', () => {
  const chain = designChain(inData([highPass(1)]), samplingRateHz)

  test('is the measured noise over the power that the stages in the data let pass, down to 40 dB', () => {
    const hz = Float64Array.of(0.2, 0.5, 1, 3, 20)
    const taken = noiseDensity(noiseBefore(chain, onlyLate.noise), hz)
    const measured = noiseDensity(onlyLate.noise, hz)
    const { re, im } = stagesResponse(chain.stages, hz)
    hz.forEach((_, i) => {
      const expected = measured[i] / Math.max(1e-4, re[i] ** 2 + im[i] ** 2)
      expect(taken[i] / expected).toBeCloseTo(1, 2)
    })
  })

  test('is the noise itself where no stage is in the data', () => {
    expect(noiseBefore(designChain([highPass(1)], samplingRateHz), onlyLate.noise)).toBe(onlyLate.noise)
  })
})

describe('lateOnlyCurve', () => {
  test('is the same where the answer as the chain stands is there already', () => {
    const varied = { stage: 0, what: 'order', cutoff: 0 } as const
    const answer = lateOnlyClaim(form, onlyLate)
    expect(wholeCurve(lateOnlyCurve(form, onlyLate, varied, answer))).toEqual(
      wholeCurve(lateOnlyCurve(form, onlyLate, varied)),
    )
  })

  test('takes at most 15 fits about the chain as it stands, with a flip between each change of the verdict', () => {
    const setting = asRecorded(onlyLate)
    const progress: number[] = []
    const steps = lateOnlyCurve(form, setting, null)
    const watched = (function* () {
      for (;;) {
        const step = steps.next()
        if (step.done) return step.value
        progress.push(step.value.done)
        yield step.value
      }
    })()
    const curve = wholeCurve(watched)
    expect(curve.varied).toEqual({ stage: 0, what: 'cutoff', cutoff: 0 })
    expect(curve.points.length).toBeLessThanOrEqual(15)
    expect(progress.length).toBeGreaterThan(5)
    const present = curve.points.find(({ at }) => at === 1)
    const { number, verdict } = lateOnlyClaim(form, setting)
    expect(present).toEqual({ at: 1, number, verdict })
    const turns = curve.points.slice(1).flatMap((point, i) => (point.verdict !== curve.points[i].verdict ? [i] : []))
    expect(curve.flips.length).toBe(turns.length)
    expect(turns.length).toBeGreaterThan(0)
    curve.flips.forEach(({ at }, k) => {
      expect(at).toBeGreaterThan(curve.points[turns[k]].at)
      expect(at).toBeLessThan(curve.points[turns[k] + 1].at)
    })
  })

  test('varies a stage in the data, and none that is switched off', () => {
    expect(variedByDefaultOfFit(inData([highPass(1)]))).toEqual({ stage: 0, what: 'cutoff', cutoff: 0 })
    expect(variedByDefaultOfFit([{ ...highPass(1), enabled: false }])).toBeNull()
  })
})
