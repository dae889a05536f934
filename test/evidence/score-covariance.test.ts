import fc from 'fast-check'
import { describe, expect, test } from 'vitest'
import { defaultNoise, type NoiseSpec } from '../../src/erp/noise.ts'
import { effectiveWindow } from '../../src/evidence/effective-window.ts'
import { scoreCovariance } from '../../src/evidence/score-covariance.ts'
import { scoreVariance } from '../../src/evidence/score-noise.ts'
import { appliedStages, designChain } from '../../src/filter/chain.ts'
import { chain } from '../filter/arbitrary-chain.ts'

const white: NoiseSpec = {
  kind: 'model',
  exponent: 0,
  levelAt1HzUv2PerHz: 0,
  flatBelowHz: 0.02,
  whiteUv2PerHz: 0.02,
  lines: [],
}
const withLine: NoiseSpec = {
  ...defaultNoise(),
  lines: [
    { hz: 50, amplitudeUv: 3, locked: false },
    { hz: 30, amplitudeUv: 9, locked: true },
  ],
}

/** Box minus baseline on n samples. */
function boxWeights(n: number, from: number, to: number): Float64Array {
  const weights = new Float64Array(n)
  weights.fill(1 / (to - from), from, to)
  for (let i = 0; i < 20; i++) weights[i] -= 1 / 20
  return weights
}

describe('scoreCovariance', () => {
  const n = 200
  const a = boxWeights(n, 60, 90)
  const b = boxWeights(n, 80, 140)

  test('of white noise is the sum of the products of weights, times the variance of a sample', () => {
    // a one-sided density S has the variance S·fs/2
    const variance = 0.02 * 125
    const products = (x: Float64Array, y: Float64Array) => x.reduce((sum, value, i) => sum + value * y[i], 0)
    const probe = (weights: Float64Array) => [{ weights, stages: [], factor: 1 }]
    const [[aa, ab], [ba, bb]] = scoreCovariance([probe(a), probe(b)], white, 250)
    expect(aa).toBeCloseTo(variance * products(a, a), 9)
    expect(bb).toBeCloseTo(variance * products(b, b), 9)
    expect(ab).toBeCloseTo(variance * products(a, b), 9)
    expect(ba).toBe(ab)
  })

  test('of a change is the variance of its effective window, g − w, for any chain', () => {
    fc.assert(
      fc.property(chain, (some) => {
        const g = effectiveWindow(some, a, 'continuous')
        const window = g.values.slice()
        for (let i = 0; i < n; i++) window[i - g.start] -= a[i]
        const expected = scoreVariance(window, withLine, some.samplingRateHz, 1)
        const probe = [
          { weights: a, stages: appliedStages(some), factor: 1 },
          { weights: a, stages: [], factor: -1 },
        ]
        const [[found]] = scoreCovariance([probe], withLine, some.samplingRateHz)
        // without a stage nothing changes
        expect(Math.abs(found - expected)).toBeLessThanOrEqual(1e-4 * expected + 1e-9)
      }),
      { numRuns: 30 },
    )
  })

  test('by lags and by frequencies is the same', () => {
    const some = designChain([{ design: 'amplifier', pass: 'high', order: 1, cutoffHz: 0.5 }], 250)
    const stages = appliedStages(some)
    const byLags = scoreCovariance(
      [[{ weights: a, stages, factor: 1 }], [{ weights: b, stages, factor: 1 }]],
      withLine,
      250,
    )
    // a term of no weight that has seen other stages makes the way by frequencies
    const nothing = { weights: a, stages: [], factor: 0 }
    const byFrequencies = scoreCovariance(
      [[{ weights: a, stages, factor: 1 }, nothing], [{ weights: b, stages, factor: 1 }]],
      withLine,
      250,
    )
    byLags.flat().forEach((value, k) => {
      expect(byFrequencies.flat()[k] / value).toBeCloseTo(1, 4)
    })
  })

  test('of long weights, whose transforms are interpolated, is right as well', () => {
    const stages = appliedStages(designChain([{ design: 'amplifier', pass: 'high', order: 1, cutoffHz: 0.5 }], 1000))
    const long = Float64Array.from({ length: 3000 }, (_, i) => Math.sin(i / 7) * Math.exp(-i / 900) + 0.1)
    const window = effectiveWindow({ samplingRateHz: 1000, stages }, long, 'continuous')
    for (let i = 0; i < long.length; i++) window.values[i - window.start] -= long[i]
    const [[found]] = scoreCovariance(
      [
        [
          { weights: long, stages, factor: 1 },
          { weights: long, stages: [], factor: -1 },
        ],
      ],
      withLine,
      1000,
    )
    expect(found / scoreVariance(window.values, withLine, 1000, 1)).toBeCloseTo(1, 4)
  })

  test('of two scores adds up as covariances do', () => {
    const stages = appliedStages(
      designChain(
        [
          {
            design: 'butterworth',
            pass: 'high',
            order: 2,
            cutoffsHz: [1],
            meaning: 'half-amplitude',
            direction: 'both',
          },
        ],
        250,
      ),
    )
    const one = [{ weights: a, stages, factor: 1 }]
    const two = [{ weights: b, stages: [], factor: 1 }]
    const [[aa, ab, as], [, bb, bs], [, , ss]] = scoreCovariance([one, two, [...one, ...two]], withLine, 250)
    expect(ss / (aa + 2 * ab + bb)).toBeCloseTo(1, 10)
    expect(as / (aa + ab)).toBeCloseTo(1, 10)
    expect(bs / (ab + bb)).toBeCloseTo(1, 10)
  })
})
