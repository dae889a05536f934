import { describe, expect, test } from 'vitest'
import { actingStages } from '../../src/evidence/acting-stages.ts'
import { effectiveWindow, scoreVariance } from '../../src/evidence/index.ts'
import { noiseCovariance, noiseMatrix, noiseVariance } from '../../src/evidence/filtered-noise-covariance.ts'
import { lowestCosines } from '../../src/evidence/lowest-cosines.ts'
import { defaultNoise, type NoiseModel, seededRandom } from '../../src/erp/index.ts'
import { designChain, type StageSpec } from '../../src/filter/index.ts'

const n = 150
const CHAINS: [string, StageSpec[]][] = [
  ['no stage', []],
  [
    'a zero-phase high-pass',
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
  ],
  [
    'an amplifier and a windowed sinc',
    [
      { design: 'amplifier', pass: 'high', order: 1, cutoffHz: 0.3 },
      {
        design: 'windowed-sinc',
        pass: 'low',
        cutoffsHz: [30],
        meaning: 'half-amplitude',
        transitionHz: 10,
        window: { name: 'hamming' },
        delay: 'compensated',
      },
    ],
  ],
]
const NOISE: NoiseModel = { ...defaultNoise(), lines: [{ hz: 50, amplitudeUv: 3, locked: false }] }

describe('filtered noise', () => {
  for (const [name, specs] of CHAINS) {
    for (const extent of ['continuous', 'epochs'] as const) {
      test(`wᵀCw is the variance of the score by its effective window: ${name}, ${extent}`, () => {
        const chain = designChain(specs, 250)
        const covariance = noiseCovariance(actingStages(chain, extent), NOISE, 40, n)
        const random = seededRandom(7)
        for (const weights of [
          new Float64Array(n).fill(1 / 30, 60, 90).map((w, i) => (i < 20 ? w - 1 / 20 : w)),
          Float64Array.from({ length: n }, () => random.normal()),
        ]) {
          const wanted = scoreVariance(effectiveWindow(chain, weights, extent).values, NOISE, 250, 40)
          expect(Math.abs(noiseVariance(covariance, weights) / wanted - 1)).toBeLessThan(1e-5)
        }
      })
    }
  }

  test('the matrix has the variances of single samples and of their sums, with and without weights', () => {
    const stages = actingStages(designChain(CHAINS[1]![1], 250), 'epochs')
    const covariance = noiseCovariance(stages, NOISE, 40, n)
    const matrix = noiseMatrix(covariance, null)
    const weight = (...at: number[]) => Float64Array.from({ length: n }, (_, i) => (at.includes(i) ? 1 : 0))
    for (const [i, j] of [
      [0, 0],
      [3, 90],
      [149, 20],
    ] as const) {
      const both = noiseVariance(covariance, weight(i, j))
      const wanted =
        i === j ? both : (both - noiseVariance(covariance, weight(i)) - noiseVariance(covariance, weight(j))) / 2
      expect(matrix[i * n + j]).toBeCloseTo(wanted, 8)
    }
    const rows = new Float64Array(2 * n)
    rows.set(weight(3), 0)
    rows.set(weight(90), n)
    const small = noiseMatrix(covariance, { rows, count: 2 })
    expect(small[1]).toBeCloseTo(matrix[3 * n + 90]!, 10)
    expect(small[3]).toBeCloseTo(matrix[90 * n + 90]!, 10)
  })

  test('fewer than one trial is refused', () => {
    expect(() => noiseCovariance(actingStages(designChain([], 250), 'epochs'), NOISE, 0, n)).toThrow(
      /trials must be at least 1, was 0/,
    )
  })
})

describe('lowest cosines', () => {
  test('up to 512 samples are kept as they are', () => {
    expect(lowestCosines(512, 250)).toBeNull()
    expect(lowestCosines(513, 250)?.count).toBe(512)
  })

  test('they are orthonormal and reach at least 50 Hz', () => {
    for (const [samples, rate] of [
      [600, 250],
      [1500, 250],
      [3000, 1000],
    ] as const) {
      const { rows, count } = lowestCosines(samples, rate)!
      expect((count * rate) / (2 * samples)).toBeGreaterThanOrEqual(50)
      for (const [i, j] of [
        [0, 0],
        [1, 1],
        [count - 1, count - 1],
        [0, 7],
        [count - 2, count - 1],
      ] as const) {
        let sum = 0
        for (let k = 0; k < samples; k++) sum += rows[i * samples + k]! * rows[j * samples + k]!
        expect(sum).toBeCloseTo(i === j ? 1 : 0, 12)
      }
    }
  })

  test('a waveform that lasts too long is refused with the most that is possible', () => {
    expect(() => lowestCosines(5000, 250)).toThrow(/at most 3000 samples at 250 Hz, had 5000/)
  })
})
