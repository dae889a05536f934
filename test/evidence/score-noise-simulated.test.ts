import { describe, expect, test } from 'vitest'
import { defaultNoise, type NoiseModel } from '../../src/erp/noise.ts'
import { type Score, scoreWeights } from '../../src/erp/score.ts'
import { seededRandom } from '../../src/erp/seeded-random.ts'
import { drawNoise, noiseSource } from '../../src/erp/simulate-noise.ts'
import { epochTimesMs } from '../../src/erp/waveform.ts'
import { effectiveWindow } from '../../src/evidence/effective-window.ts'
import { scoreVariance } from '../../src/evidence/score-noise.ts'
import { applyChain, designChain, type StageSpec } from '../../src/filter/index.ts'

/**
 * The exact variance of a score against simulated trials: noise is drawn before the chain, and the score of the filtered noise is
 * found by the adjoint, which a first test holds to filtering. SIDELOBE_LONG=1 draws 20 000 trials instead of 2000.
 */
const TRIALS = process.env.SIDELOBE_LONG ? 20_000 : 2000
/** Of all comparisons together, fewer than 1 in 100 runs would leave this many SDs by chance. */
const SDS = 4.2

const fs = 125
const timesMs = epochTimesMs(fs, { fromMs: -400, toMs: 1000 })
const baseline = { fromMs: -200, toMs: 0 }
const SCORES: Score[] = [
  { kind: 'mean', fromMs: 300, toMs: 500, polarity: 'positive' },
  { kind: 'moment', fromMs: 100, toMs: 100, polarity: 'positive' },
]

const butterworth = (
  pass: 'low' | 'high' | 'band',
  order: number,
  cutoffsHz: number[],
  direction: 'both' | 'forward',
) => ({ design: 'butterworth', pass, order, cutoffsHz, meaning: 'half-amplitude', direction }) satisfies StageSpec
const sinc = (delay: 'compensated' | 'causal' | 'minimum-phase') =>
  ({
    design: 'windowed-sinc',
    pass: 'low',
    cutoffsHz: [20],
    meaning: 'half-amplitude',
    transitionHz: 8,
    window: { name: 'hamming' },
    delay,
  }) satisfies StageSpec

const CHAINS: [string, StageSpec[]][] = [
  ['no filter', []],
  ['a zero-phase high-pass', [butterworth('high', 2, [0.8], 'both')]],
  ['a causal high-pass', [butterworth('high', 1, [0.5], 'forward')]],
  ['a zero-phase low-pass', [butterworth('low', 4, [12], 'both')]],
  ['a causal band-pass', [butterworth('band', 2, [1, 20], 'forward')]],
  ['a compensated windowed sinc', [sinc('compensated')]],
  ['a causal windowed sinc', [sinc('causal')]],
  ['a minimum-phase windowed sinc', [sinc('minimum-phase')]],
  ['a notch', [{ design: 'notch', frequencyHz: 50, bandwidthHz: 5, harmonics: 0, direction: 'both' }]],
  ['a moving average', [{ design: 'moving-average', durationMs: 100, delay: 'compensated' }]],
  [
    'an amplifier and a high-pass',
    [{ design: 'amplifier', pass: 'high', order: 1, cutoffHz: 0.5 }, butterworth('high', 2, [0.8], 'both')],
  ],
]

const silent: NoiseModel = {
  kind: 'model',
  exponent: 1,
  levelAt1HzUv2PerHz: 0,
  flatBelowHz: 0.02,
  whiteUv2PerHz: 0,
  lines: [],
}
const NOISES: [string, NoiseModel][] = [
  ['white noise', { ...silent, whiteUv2PerHz: 0.5 }],
  ['a power law', { ...silent, exponent: 1.4, levelAt1HzUv2PerHz: 8, whiteUv2PerHz: 0.02 }],
  ['an alpha peak', { ...silent, alpha: { centreHz: 10, sdHz: 1, peakUv2PerHz: 12 }, whiteUv2PerHz: 0.02 }],
  [
    'a line',
    {
      ...silent,
      lines: [
        { hz: 50, amplitudeUv: 4, locked: false },
        { hz: 30, amplitudeUv: 9, locked: true },
      ],
    },
  ],
  ['the default noise', defaultNoise()],
]

const windows = CHAINS.flatMap(([name, specs]) =>
  (['continuous', 'epochs'] as const).flatMap((extent) =>
    SCORES.map((score) => ({
      name: `${name}, ${extent}, ${score.kind}`,
      window: effectiveWindow(designChain(specs, fs), scoreWeights(score, baseline, timesMs), extent),
    })),
  ),
)

describe('scoreVariance', () => {
  const first = Math.min(...windows.map(({ window }) => window.start))
  const last = Math.max(...windows.map(({ window }) => window.start + window.values.length))

  test('the adjoint that scores the trials is filtering and scoring', () => {
    const random = seededRandom(99)
    const x = Float64Array.from({ length: timesMs.length }, () => random.normal())
    for (const [, specs] of CHAINS.slice(1, 10)) {
      const chain = designChain(specs, fs)
      for (const score of SCORES) {
        const w = scoreWeights(score, baseline, timesMs)
        const { values, start } = effectiveWindow(chain, w, 'epochs')
        const filtered = applyChain(chain, x, 'epochs')
        const direct = w.reduce((sum, v, i) => sum + v * filtered[i], 0)
        const adjoint = x.reduce((sum, v, i) => sum + v * values[i - start], 0)
        expect(adjoint).toBeCloseTo(direct, 10)
      }
    }
  })

  test.each(NOISES)(
    `of %s is what ${TRIALS} trials have, within their own confidence interval, for every design`,
    (_, noise) => {
      const source = noiseSource(noise, fs, last - first)
      const random = seededRandom(2024)
      const sums = windows.map(() => [0, 0])
      for (let pair = 0; pair < TRIALS / 2; pair++) {
        for (const x of drawNoise(source, random)) {
          windows.forEach(({ window: { values, start } }, i) => {
            let score = 0
            for (let m = 0; m < values.length; m++) score += values[m] * x[start - first + m]
            sums[i][0] += score * score
            sums[i][1] += score ** 4
          })
        }
      }
      windows.forEach(({ name, window }, i) => {
        const exact = scoreVariance(window.values, noise, fs, 1)
        const square = sums[i][0] / TRIALS
        // of a mean square, by the trials' own fourth moment
        const error = Math.sqrt((sums[i][1] / TRIALS - square * square) / TRIALS)
        expect(Math.abs(square - exact), name).toBeLessThan(SDS * error + 1e-12)
      })
    },
    600_000,
  )
})
