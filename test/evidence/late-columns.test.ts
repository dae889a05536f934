import { describe, expect, test } from 'vitest'
import { actingStages, actOn } from '../../src/evidence/acting-stages.ts'
import { lateActivity, lateColumns, samplesAhead } from '../../src/evidence/late-columns.ts'
import { centresFor, gaussianOn, gaussianSum } from '../../src/evidence/squared-exponential.ts'
import { designChain, reach, type StageSpec } from '../../src/filter/index.ts'

const highPass = (cutoffHz: number, direction: 'both' | 'forward'): StageSpec => ({
  design: 'butterworth',
  pass: 'high',
  order: 2,
  cutoffsHz: [cutoffHz],
  meaning: 'half-amplitude',
  direction,
})

/** Covariance of Σ u·φ at two samples. */
function covariance(sum: ReturnType<typeof gaussianSum>, i: number, j: number): number {
  let total = 0
  for (const centre of centresFor(sum, Math.min(i, j), Math.max(i, j) + 1)) {
    total += gaussianOn(sum, centre, i, i + 1)[0]! * gaussianOn(sum, centre, j, j + 1)[0]!
  }
  return total
}

describe('sum of Gaussians', () => {
  test('its covariance is σ²·exp(−d²/(2ℓ²)) to 2e-7 of σ² at any sampling rate', () => {
    for (const length of [0.4, 1.5, 3.75, 7.5, 15.4]) {
      const sum = gaussianSum(10, length)
      for (const d of [0, 1, 2, 5, 11]) {
        const wanted = 100 * Math.exp((-d * d) / (2 * length * length))
        for (const i of [0, 1, 7]) expect(Math.abs(covariance(sum, i, i + d) - wanted)).toBeLessThan(2e-7 * 100)
      }
    }
  })
})

describe('late columns', () => {
  const n = 120
  const onset = 60

  /** K·Σx·Kᵀ at samples i, j from the covariance of every pair of late samples. */
  function dense(chain: ReturnType<typeof designChain>, extent: 'continuous' | 'epochs', length: number, end: number) {
    const stages = actingStages(chain, extent)
    const late = end - onset
    const k = Array.from({ length: late }, (_, m) => actOn(stages, Float64Array.of(1), onset + m, n))
    const halves = k.map((_, m) => {
      const row = new Float64Array(n)
      for (let q = 0; q < late; q++) {
        const c = 100 * Math.exp(-((m - q) ** 2) / (2 * length ** 2))
        if (c > 1e-14) for (let i = 0; i < n; i++) row[i]! += c * k[q]![i]!
      }
      return row
    })
    return (i: number, j: number) => halves.reduce((sum, row, m) => sum + k[m]![i]! * row[j]!, 0)
  }

  const cases: [string, StageSpec[], 'continuous' | 'epochs', number][] = [
    ['a zero-phase high-pass', [highPass(2, 'both')], 'continuous', 1e-5],
    ['a causal high-pass', [highPass(2, 'forward')], 'continuous', 1e-5],
    ['a slow high-pass, whose far Gaussians are taken together', [highPass(0.2, 'both')], 'continuous', 1e-4],
    ['an epoch with its padding', [highPass(2, 'both')], 'epochs', 1e-5],
    [
      'an amplifier before an epoch',
      [{ design: 'amplifier', pass: 'high', order: 1, cutoffHz: 1 }, highPass(2, 'both')],
      'epochs',
      1e-5,
    ],
  ]
  for (const [name, specs, extent, tolerance] of cases) {
    test(`FᵀF is the filtered covariance of every pair of samples: ${name}`, () => {
      const chain = designChain(specs, 100)
      const columns = lateColumns(actingStages(chain, extent), n, onset, gaussianSum(10, 1.5))
      const wanted = dense(chain, extent, 1.5, columns.end)
      for (const [i, j] of [
        [10, 10],
        [40, 59],
        [59, 80],
        [60, 60],
        [90, 95],
        [119, 119],
        [0, 119],
      ] as const) {
        let sum = 0
        for (let c = 0; c < columns.count; c++) sum += columns.filtered[c * n + i]! * columns.filtered[c * n + j]!
        expect(Math.abs(sum - wanted(i, j))).toBeLessThan(tolerance * 100)
      }
    })
  }

  test('late activity goes on after the epoch at least as far as the kernel reaches, and not at all for a causal chain or an epoch', () => {
    const chain = designChain([highPass(1, 'both')], 100)
    const ahead = samplesAhead(actingStages(chain, 'continuous'))
    expect(ahead).toBeGreaterThanOrEqual(reach(chain.stages).beforeSamples)
    expect(ahead).toBeLessThan(1000)
    expect(samplesAhead(actingStages(chain, 'epochs'))).toBe(0)
    expect(samplesAhead(actingStages(designChain([highPass(1, 'forward')], 100), 'continuous'))).toBe(0)
  })

  test('stages in the data act, as they have acted', () => {
    const [inData] = designChain([{ ...highPass(1, 'both'), inData: true }], 100).stages
    const stages = actingStages({ samplingRateHz: 100, stages: [inData!] }, 'continuous')
    expect(stages.continuous).toHaveLength(1)
  })

  test('what a filtered sum of rows is, is the sum of its late activity filtered', () => {
    const chain = designChain([highPass(0.2, 'both')], 100)
    const stages = actingStages(chain, 'continuous')
    const columns = lateColumns(stages, n, onset, gaussianSum(10, 1.5))
    const weights = Float64Array.from({ length: columns.count }, (_, c) => Math.sin(1 + c * c))
    const x = lateActivity(columns, weights)
    const y = actOn(stages, x, onset, n)
    for (let i = 0; i < n; i += 7) {
      let sum = 0
      for (let c = 0; c < columns.count; c++) sum += weights[c]! * columns.filtered[c * n + i]!
      // Gaussians are taken as 0 beyond 4 ℓ, and uncut ones may reach a little further than where activity ends
      expect(Math.abs(sum - y[i]!)).toBeLessThan(1e-4)
    }
  })
})
