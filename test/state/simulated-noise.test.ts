import { describe, expect, test } from 'vitest'
import { scoreVariance } from '../../src/evidence/score-noise.ts'
import { scoreWeights } from '../../src/erp/score.ts'
import { evaluate } from '../../src/state/evaluate.ts'
import { noiseStore, simulateNoise } from '../../src/state/noise-run.ts'
import { NOISE_DRAWS, type NoiseQuestion, noiseQuestion, noiseSlice } from '../../src/state/simulated-noise.ts'
import { DIFFERENCE, startWorkspace, type Workspace } from '../../src/state/workspace.ts'

const latency = (change: Partial<Workspace> = {}): Workspace => ({
  ...startWorkspace(),
  score: { kind: 'peak-latency', fromMs: 200, toMs: 700, polarity: 'positive' },
  ...change,
})

function asked(workspace: Workspace) {
  const outcome = evaluate(workspace, null)
  if (!outcome.ok) throw new Error('the workspace does not evaluate')
  return noiseQuestion(workspace, outcome.evaluation, null)
}

const whole = (key: string, question: NoiseQuestion) => {
  const noise = noiseSlice(key, question, Number.POSITIVE_INFINITY)
  if (!noise) throw new Error('nothing was simulated')
  return noise
}

describe('the simulated noise of a latency', () => {
  test('is asked for where no formula holds, and nowhere else', () => {
    expect(asked(startWorkspace())).toBeNull()
    expect(asked(latency())).toMatchObject({ trials: 40, extent: 'continuous' })
    const nothing = latency({ score: { kind: 'onset-latency', fromMs: -390, toMs: -380, polarity: 'negative' } })
    expect(asked(nothing)).toBeNull()
    // of a difference the variance is twice that of one condition: half the trials; of single ones there is no average to draw
    const difference = { first: 'rare targets', second: 'frequent standards' }
    const shown = { ...startWorkspace().shown, difference, chosen: DIFFERENCE }
    expect(asked(latency({ shown, trials: 3 }))).toMatchObject({ trials: 1.5 })
    expect(asked(latency({ shown, trials: 1 }))).toBeNull()
  })

  test('comes to the same numbers in small slices and in one, and its own error falls with the root of the draws', () => {
    const question = asked(latency()) as NoiseQuestion
    const once = whole('one', question)
    let slices = noiseSlice('many', question, 0)
    const early = slices
    while (slices && slices.draws < NOISE_DRAWS) slices = noiseSlice('many', null, 0)
    expect(slices).toEqual(once)
    expect(once.draws).toBe(NOISE_DRAWS)
    const gain = (early?.after.standardError as number) / once.after.standardError
    expect(gain).toBeGreaterThan(Math.sqrt(NOISE_DRAWS / 50) / 2)
    // a Gaussian's SD is known to SD/√(2·draws)
    expect(once.after.standardError / (once.after.value / Math.sqrt(2 * NOISE_DRAWS))).toBeLessThan(3)
  })

  test('holds, for a score that has a formula, what the formula gives', () => {
    const question = asked(latency()) as NoiseQuestion
    const score = { kind: 'mean' as const, fromMs: 300, toMs: 500, polarity: 'positive' as const }
    const { before } = whole('mean', { ...question, score })
    const { noise, samplingRateHz, trials, timesMs, baseline } = question
    const weights = scoreWeights(score, baseline, timesMs)
    const exact = Math.sqrt(scoreVariance(weights, noise, samplingRateHz, trials))
    expect(Math.abs(before.value - exact)).toBeLessThan(4 * before.standardError)
  })

  test('falls with the trials, and its precision factor is the ratio of the variances', () => {
    const few = whole('few', asked(latency()) as NoiseQuestion)
    const many = whole('many trials', asked(latency({ trials: 400 })) as NoiseQuestion)
    expect(many.before.value).toBeLessThan(0.6 * few.before.value)
    const { before, after, precisionFactor } = few
    expect(precisionFactor?.value).toBeCloseTo((before.value / after.value) ** 2, 10)
  })
})

describe('the simulated noise of a peak’s amplitude', () => {
  const peak = (trials: number) =>
    latency({ trials, score: { kind: 'peak-amplitude', fromMs: 300, toMs: 500, polarity: 'positive' } })
  const heldFixed = (workspace: Workspace) => {
    const outcome = evaluate(workspace, null)
    if (!outcome.ok || !outcome.evaluation.precision) throw new Error('there is no noise row')
    return outcome.evaluation.precision
  }

  test('is that of the peak held fixed where the noise is too small to move it', () => {
    const workspace = peak(1_000_000)
    const { after, before } = whole('peak of many', asked(workspace) as NoiseQuestion)
    const fixed = heldFixed(workspace)
    expect(Math.abs(after.value / fixed.after - 1)).toBeLessThan(0.05)
    expect(Math.abs(before.value / fixed.before - 1)).toBeLessThan(0.05)
  })

  test('is smaller where the noise moves the peak', () => {
    const workspace = peak(40)
    const { after } = whole('peak of few', asked(workspace) as NoiseQuestion)
    expect(after.value + 4 * after.standardError).toBeLessThan(heldFixed(workspace).after)
  })
})

describe('a simulation as it runs', () => {
  const question = asked(latency()) as NoiseQuestion

  test('is refined until all draws are there, and asks a worker that was started anew the question again', async () => {
    let calls = 0
    await simulateNoise('run', question, new AbortController().signal, async (key, given, _budget) => {
      calls++
      // another worker at the third call: it knows nothing of the question
      if (calls === 3 && given === null) return null
      return noiseSlice(`${key} ${calls < 3 ? 'first' : 'second'}`, given, 200)
    })
    expect(noiseStore.getState().known.run.noise?.draws).toBe(NOISE_DRAWS)
  })

  test('stops where it is cancelled, and says what was wrong where it fails', async () => {
    const control = new AbortController()
    await simulateNoise('stopped', question, control.signal, async (key, given) => {
      control.abort()
      return noiseSlice(key, given, 0)
    })
    expect(noiseStore.getState().known.stopped).toBeUndefined()
    await simulateNoise('failed', { ...question, trials: 0 }, new AbortController().signal, async (...args) =>
      noiseSlice(...args),
    )
    expect(noiseStore.getState().known.failed.reason).toMatch(/at least 1/)
  })
})
