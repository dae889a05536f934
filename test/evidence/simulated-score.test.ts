import { describe, expect, test } from 'vitest'
import { correctBaseline } from '../../src/erp/baseline.ts'
import type { Component } from '../../src/erp/component.ts'
import { defaultNoise } from '../../src/erp/noise.ts'
import { type Score, scoreOf, scoreWeights } from '../../src/erp/score.ts'
import { seededRandom } from '../../src/erp/seeded-random.ts'
import { drawNoise, noiseSource } from '../../src/erp/simulate-noise.ts'
import { epochTimesMs } from '../../src/erp/waveform.ts'
import { effectiveWindow } from '../../src/evidence/effective-window.ts'
import { filterBuiltWaveform } from '../../src/evidence/filtered-waveform.ts'
import { scoreVariance } from '../../src/evidence/score-noise.ts'
import {
  addDraw,
  BATCH_DRAWS,
  emptySums,
  mergeSums,
  scoreSimulation,
  scoreStretch,
  simulateBatch,
  simulatedFigures,
  simulationStart,
} from '../../src/evidence/simulated-score.ts'
import { designChain, runContinuous, type StageSpec } from '../../src/filter/index.ts'

const fs = 125
const timesMs = epochTimesMs(fs, { fromMs: -400, toMs: 1000 })
const baseline = { fromMs: -200, toMs: 0 }
const PULSE: Component = { name: 'late', shape: 'gaussian', amplitudeUv: 8, latencyMs: 400, widthMs: 180 }
const HIGH: StageSpec = {
  design: 'butterworth',
  pass: 'high',
  order: 2,
  cutoffsHz: [0.8],
  meaning: 'half-amplitude',
  direction: 'both',
}
const LOW: StageSpec = { ...HIGH, pass: 'low', cutoffsHz: [15] }
const score = (kind: Score['kind']): Score => ({ kind, fromMs: 250, toMs: 600, polarity: 'positive' })

function simulate(specs: StageSpec[], extent: 'continuous' | 'epochs', of: Score, batches: number, seed = 1) {
  const chain = designChain(specs, fs)
  const after = filterBuiltWaveform(chain, [PULSE], timesMs, extent)
  const simulation = scoreSimulation({
    chain,
    extent,
    noise: defaultNoise(),
    noisePassed: 'nothing',
    trials: 30,
    timesMs,
    baseline,
    score: of,
    after,
    seed,
  })
  let state = simulationStart(simulation)
  for (let b = 0; b < batches; b++) state = simulateBatch(simulation, state)
  const clean = scoreOf(correctBaseline(after, timesMs, baseline), timesMs, of)
  const unfiltered = filterBuiltWaveform(designChain([], fs), [PULSE], timesMs, extent)
  const before = scoreOf(correctBaseline(unfiltered, timesMs, baseline), timesMs, of)
  const figures = simulatedFigures(state.sums, before as number, clean as number)
  if (!figures) throw new Error('no draws')
  return { simulation, state, figures, chain }
}

describe('simulatedFigures', () => {
  test('of numbers are their mean, SD and distances, written out plainly', () => {
    const random = seededRandom(6)
    const values = Array.from({ length: 500 }, () => 3 + random.normal() + random.uniform() ** 3)
    const sums = values.reduce((s, v) => addDraw(s, v), emptySums(2.5))
    const figures = simulatedFigures(addDraw(sums, 'no peak'), 2, 3.1)
    const mean = values.reduce((s, v) => s + v, 0) / 500
    const sd = Math.sqrt(values.reduce((s, v) => s + (v - mean) ** 2, 0) / 499)
    expect(figures?.bias).toBeCloseTo(1.1, 12)
    expect(figures?.noise.value).toBeCloseTo(sd, 10)
    expect(figures?.noiseShift?.value).toBeCloseTo(mean - 3.1, 10)
    expect(figures?.noiseShift?.standardError).toBeCloseTo(sd / Math.sqrt(500), 10)
    expect(figures?.totalError?.value).toBeCloseTo(Math.hypot(1.1, sd), 10)
    expect(figures?.distance?.value).toBeCloseTo(Math.sqrt(values.reduce((s, v) => s + (v - 2) ** 2, 0) / 500), 10)
    expect(figures?.draws).toBe(501)
    expect(figures?.missing).toBe(1)
  })

  test('their standard errors are those that repeating the simulation shows', () => {
    const repeats = 400
    const seen = Array.from({ length: repeats }, (_, seed) => {
      const random = seededRandom(seed, 9)
      let sums = emptySums(0)
      for (let i = 0; i < 200; i++) sums = addDraw(sums, Math.exp(0.5 * random.normal()))
      return simulatedFigures(sums, 0.6, 1) as NonNullable<ReturnType<typeof simulatedFigures>>
    })
    const spread = (of: (f: (typeof seen)[0]) => number) => {
      const values = seen.map(of)
      const mean = values.reduce((s, v) => s + v, 0) / repeats
      return Math.sqrt(values.reduce((s, v) => s + (v - mean) ** 2, 0) / repeats)
    }
    const claimed = (of: (f: (typeof seen)[0]) => number) => seen.reduce((s, f) => s + of(f), 0) / repeats
    for (const name of ['noise', 'noiseShift', 'totalError', 'distance'] as const) {
      const ratio = claimed((f) => f[name]?.standardError as number) / spread((f) => f[name]?.value as number)
      expect(ratio, name).toBeGreaterThan(0.8)
      expect(ratio, name).toBeLessThan(1.2)
    }
  })

  test('are none for fewer than two draws, and sums about two shifts are not added', () => {
    expect(simulatedFigures(addDraw(emptySums(0), 3), 1, 1)).toBe(null)
    expect(() => mergeSums(emptySums(0), emptySums(1))).toThrow(/about one shift/)
  })
})

describe('simulateBatch', () => {
  test('goes on from any state as if it had never stopped, and another worker can', () => {
    const whole = simulate([HIGH], 'continuous', score('peak-amplitude'), 4)
    let state = structuredClone(simulate([HIGH], 'continuous', score('peak-amplitude'), 2).state)
    const { simulation } = simulate([HIGH], 'continuous', score('peak-amplitude'), 1)
    state = simulateBatch(simulation, simulateBatch(simulation, state))
    expect(state).toEqual(whole.state)
    expect(state.sums.found + state.sums.missing).toBe(4 * BATCH_DRAWS)
    expect(simulate([HIGH], 'continuous', score('peak-amplitude'), 2, 5).state).not.toEqual(
      simulate([HIGH], 'continuous', score('peak-amplitude'), 2).state,
    )
  })

  test.each<['continuous' | 'epochs', StageSpec[]]>([
    ['continuous', [HIGH, LOW]],
    ['epochs', [HIGH, LOW]],
    ['epochs', [{ design: 'amplifier', pass: 'high', order: 1, cutoffHz: 1 }, LOW]],
  ])('of a linear score finds the exact noise (%s)', (extent, specs) => {
    const of = score('mean')
    const { figures, chain } = simulate(specs, extent, of, 80)
    const g = effectiveWindow(chain, scoreWeights(of, baseline, timesMs), extent).values
    const exact = Math.sqrt(scoreVariance(g, defaultNoise(), fs, 30))
    expect(Math.abs(figures.noise.value - exact)).toBeLessThan(4 * figures.noise.standardError + 2e-3 * exact)
    expect(Math.abs(figures.noiseShift?.value as number)).toBeLessThan(
      4 * (figures.noiseShift?.standardError as number),
    )
  })

  test('of a peak agrees with noise drawn before the chain, filtered and scored the long way', () => {
    const of = score('peak-amplitude')
    const { figures, chain } = simulate([HIGH, LOW], 'continuous', of, 60)
    // six seconds on either side of the epoch: the kernel is gone there
    const reach = 6 * fs
    const n = timesMs.length
    const source = noiseSource(defaultNoise(), fs, n + 2 * reach)
    const random = seededRandom(77)
    const clean = filterBuiltWaveform(chain, [PULSE], timesMs, 'continuous')
    let sums = emptySums(0)
    for (let pair = 0; pair < 1000; pair++) {
      for (const x of drawNoise(source, random, 30)) {
        const y = runContinuous(chain.stages, x, reach, reach + n).map((v, i) => v + clean[i])
        sums = addDraw(sums, scoreOf(correctBaseline(y, timesMs, baseline), timesMs, of))
      }
    }
    const plain = simulatedFigures(
      sums,
      null,
      figures.bias === null ? null : (scoreOf(correctBaseline(clean, timesMs, baseline), timesMs, of) as number),
    )
    const apart = (a: { value: number; standardError: number }, b: { value: number; standardError: number }) =>
      Math.abs(a.value - b.value) / Math.hypot(a.standardError, b.standardError)
    expect(apart(figures.noise, plain?.noise as never)).toBeLessThan(4)
    expect(apart(figures.noiseShift as never, plain?.noiseShift as never)).toBeLessThan(4)
    // the largest of a noisy stretch is too large
    expect(figures.noiseShift?.value).toBeGreaterThan(4 * (figures.noiseShift?.standardError as number))
  })

  test('counts what has no peak, and leaves it out of the figures', () => {
    const narrow: Score = { kind: 'peak-amplitude', fromMs: 300, toMs: 330, polarity: 'positive' }
    const chain = designChain([LOW], fs)
    const after = filterBuiltWaveform(chain, [PULSE], timesMs, 'epochs')
    const simulation = scoreSimulation({
      chain,
      extent: 'epochs',
      noise: defaultNoise(),
      noisePassed: 'nothing',
      trials: 30,
      timesMs,
      baseline,
      score: narrow,
      after,
      seed: 3,
    })
    let state = simulationStart(simulation)
    for (let b = 0; b < 4; b++) state = simulateBatch(simulation, state)
    expect(state.sums.missing).toBeGreaterThan(20)
    const figures = simulatedFigures(state.sums, null, null)
    expect(figures?.missing).toBe(state.sums.missing)
    expect(figures?.bias).toBe(null)
    expect(figures?.totalError).toBe(null)
  })
})

describe('scoreStretch', () => {
  test('holds everything that a score looks at: the rest may be anything', () => {
    const random = seededRandom(12)
    for (const kind of ['mean', 'area', 'peak-amplitude', 'peak-latency', 'area-latency', 'onset-latency'] as const) {
      for (let i = 0; i < 40; i++) {
        const from = -400 + 8 * Math.floor(random.uniform() * 120)
        const of: Score = { kind, fromMs: from, toMs: Math.min(1000, from + 200), polarity: 'positive' }
        const y = timesMs.map((t) => 4 * Math.exp(-(((t - from - 90) / 60) ** 2)) + 0.3 * random.normal())
        const stretch = scoreStretch(of, timesMs)
        const part = scoreOf(y.slice(stretch.from, stretch.to), timesMs.slice(stretch.from, stretch.to), of)
        expect(part).toEqual(scoreOf(y, timesMs, of))
      }
    }
  })
})
