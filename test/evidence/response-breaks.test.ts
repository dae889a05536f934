import { describe, expect, test } from 'vitest'
import { defaultNoise } from '../../src/erp/noise.ts'
import { SCENARIOS } from '../../src/erp/scenarios.ts'
import { scoreWeights, type Score } from '../../src/erp/score.ts'
import { epochTimesMs } from '../../src/erp/waveform.ts'
import { effectiveWindow } from '../../src/evidence/effective-window.ts'
import { responseBreaksHz } from '../../src/evidence/response-breaks.ts'
import { scoreVariance, scoreVarianceOfResponse } from '../../src/evidence/score-noise.ts'
import { chainResponse, designChain } from '../../src/filter/chain.ts'
import type { StageSpec } from '../../src/filter/stage.ts'

const times = epochTimesMs(500, { fromMs: -400, toMs: 1000 })
const baseline = { fromMs: -200, toMs: 0 }
const early: Score = { kind: 'mean', fromMs: 80, toMs: 140, polarity: 'positive' }
const sinc = (more: object): StageSpec =>
  ({
    design: 'windowed-sinc',
    pass: 'low',
    cutoffsHz: [30],
    meaning: 'half-amplitude',
    transitionHz: 7.5,
    window: { name: 'hamming' },
    delay: 'compensated',
    ...more,
  }) as StageSpec
const butterworth = (more: object): StageSpec =>
  ({
    design: 'butterworth',
    pass: 'high',
    order: 2,
    cutoffsHz: [1],
    meaning: 'half-amplitude',
    direction: 'both',
    ...more,
  }) as StageSpec

const chains: [string, StageSpec[]][] = [
  ['the first scenario', SCENARIOS[0].chain],
  ['a high-pass of order 12', [butterworth({ order: 12 })]],
  ['a high-pass at 0.01 Hz, causal', [butterworth({ cutoffsHz: [0.01], direction: 'forward' })]],
  ['a low-pass of order 8', [butterworth({ pass: 'low', cutoffsHz: [6], order: 8 })]],
  ['a band-stop of order 4', [butterworth({ pass: 'stop', cutoffsHz: [9.5, 10.5], order: 4 })]],
  ['a band-pass', [butterworth({ pass: 'band', cutoffsHz: [0.1, 30], order: 3 })]],
  [
    'a notch of 0.5 Hz in the alpha peak, with harmonics',
    [{ design: 'notch', frequencyHz: 10, bandwidthHz: 0.5, harmonics: 3, direction: 'both' }],
  ],
  ['a long Hamming high-pass', [sinc({ pass: 'high', cutoffsHz: [1], transitionHz: 0.2 })]],
  [
    'a long Blackman high-pass',
    [sinc({ pass: 'high', cutoffsHz: [0.5], transitionHz: 0.5, window: { name: 'blackman' } })],
  ],
  ['a rectangular low-pass', [sinc({ cutoffsHz: [12], transitionHz: 2, window: { name: 'rectangular' } })]],
  [
    'a rectangular high-pass',
    [sinc({ pass: 'high', cutoffsHz: [1], transitionHz: 0.3, window: { name: 'rectangular' } })],
  ],
  [
    'a Kaiser band-pass, causal',
    [
      sinc({
        pass: 'band',
        cutoffsHz: [1, 20],
        transitionHz: 1,
        window: { name: 'kaiser', attenuationDb: 60 },
        delay: 'causal',
      }),
    ],
  ],
  ['a moving average of 100 ms', [{ design: 'moving-average', durationMs: 100, delay: 'compensated' }]],
]

describe('scoreVarianceOfResponse with the breaks of its chain', () => {
  test.each(chains)('equals the effective window’s variance to 1e-5 for %s', (_, specs) => {
    const chain = designChain(specs, 500)
    const noise = defaultNoise()
    for (const zero of [baseline, 'none'] as const) {
      const w = scoreWeights(early, zero, times)
      const g = effectiveWindow(chain, w, 'continuous')
      const long = scoreVariance(g.values, noise, 500, 40)
      const fast = scoreVarianceOfResponse(w, (hz) => chainResponse(chain, hz), noise, 500, 40, responseBreaksHz(chain))
      expect(Math.abs(fast / long - 1)).toBeLessThan(1e-5)
    }
  })
})

describe('responseBreaksHz', () => {
  test('needs none for amplifiers and Butterworth high-passes, nor for stages in the data', () => {
    const chain = designChain(
      [
        { design: 'amplifier', pass: 'high', order: 1, cutoffHz: 0.016 },
        butterworth({}),
        { ...sinc({}), inData: true },
      ],
      500,
    )
    expect(responseBreaksHz(chain)).toEqual([])
  })

  test('lie between 0 and fs/2, ascend and hold the feature itself', () => {
    const breaks = responseBreaksHz(
      designChain(
        [{ design: 'notch', frequencyHz: 50, bandwidthHz: 2, harmonics: 4, direction: 'both' }].slice(0) as StageSpec[],
        600,
      ),
    )
    expect(breaks).toContain(50)
    expect(breaks).toContain(250)
    expect(breaks.every((hz, i) => hz > 0 && hz < 300 && (i === 0 || hz >= breaks[i - 1]))).toBe(true)
  })
})
