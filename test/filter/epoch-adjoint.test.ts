import fc from 'fast-check'
import { describe, expect, test } from 'vitest'
import { designChain } from '../../src/filter/chain.ts'
import { adjointEpochs } from '../../src/filter/epoch-adjoint.ts'
import { applyEpochs } from '../../src/filter/epoch-rules.ts'
import type { StageSpec } from '../../src/filter/stage.ts'
import { chain, signal, singleStage } from './arbitrary-chain.ts'
import { expectClose, largest, sumOfProducts } from './expect-close.ts'

const noise = (n: number, seed = 0) =>
  Float64Array.from({ length: n }, (_, i) => (((i + seed) * 7919 + ((i * i) % 1013)) % 2003) / 1001 - 1)

function expectTransposed(stages: Parameters<typeof applyEpochs>[0], w: Float64Array, x: Float64Array): void {
  const score = sumOfProducts(w, applyEpochs(stages, x))
  const traced = sumOfProducts(adjointEpochs(stages, w), x)
  const size = Math.max(score.absolute, traced.absolute) + largest(w) * largest(x)
  expect(Math.abs(score.sum - traced.sum)).toBeLessThanOrEqual(1e-12 * size)
}

describe('adjointEpochs', () => {
  test('Σ w·Kx = Σ Kᵀw·x for every single stage', () => {
    fc.assert(
      fc.property(singleStage, signal(200, 230), fc.nat(1000), ({ stages }, x, seed) => {
        expectTransposed(stages, noise(x.length, seed), x)
      }),
      { numRuns: 150 },
    )
  })

  test('Σ w·Kx = Σ Kᵀw·x for chains', () => {
    fc.assert(
      fc.property(chain, signal(220, 240), signal(240, 240), ({ stages }, x, w) => {
        expectTransposed(stages, w.slice(0, x.length), x)
      }),
    )
  })

  test('column by column it is the transposed matrix', () => {
    const { stages } = designChain(
      [
        { design: 'butterworth', pass: 'high', order: 3, cutoffsHz: [2], meaning: 'half-amplitude', direction: 'both' },
        { design: 'moving-average', durationMs: 20, delay: 'compensated' },
        { design: 'butterworth', pass: 'low', order: 2, cutoffsHz: [40], meaning: 'design', direction: 'forward' },
      ],
      500,
    )
    const n = 30
    const unit = (i: number) => Float64Array.from({ length: n }, (_, k) => (k === i ? 1 : 0))
    const columns = Array.from({ length: n }, (_, i) => applyEpochs(stages, unit(i)))
    for (let i = 0; i < n; i++) {
      const row = Float64Array.from(columns, (column) => column[i])
      expectClose(adjointEpochs(stages, unit(i)), row, 1e-13)
    }
  })

  test('keeps its precision at 0.01 Hz, 4096 Hz', () => {
    const spec = (direction: 'forward' | 'both'): StageSpec => ({
      design: 'butterworth',
      pass: 'high',
      order: 8,
      cutoffsHz: [0.01],
      meaning: 'half-power',
      direction,
    })
    for (const direction of ['forward', 'both'] as const) {
      expectTransposed(designChain([spec(direction)], 4096).stages, noise(4096, 5), noise(4096, 77))
    }
  })

  test('weights that sum to anything leave nothing of a constant after a high-pass', () => {
    fc.assert(
      fc.property(signal(100, 100), fc.constantFrom('forward' as const, 'both' as const), (w, direction) => {
        const { stages } = designChain(
          [{ design: 'butterworth', pass: 'high', order: 4, cutoffsHz: [0.5], meaning: 'design', direction }],
          500,
        )
        const g = adjointEpochs(stages, w)
        const sum = g.reduce((total, value) => total + value, 0)
        expect(Math.abs(sum)).toBeLessThan(1e-12 * (1 + g.reduce((total, value) => total + Math.abs(value), 0)))
      }),
    )
  })

  test('of no stage is the weights', () => {
    expect(adjointEpochs([], Float64Array.of(1, 2))).toEqual(Float64Array.of(1, 2))
  })

  test('refuses what the application refuses', () => {
    const { stages } = designChain(
      [{ design: 'butterworth', pass: 'low', order: 4, cutoffsHz: [30], meaning: 'design', direction: 'both' }],
      500,
    )
    expect(() => adjointEpochs(stages, new Float64Array(15))).toThrow('needs 16 samples, the epoch has 15')
    expect(() => adjointEpochs(stages, new Float64Array(40).fill(NaN))).toThrow('weights[0] must be a finite number')
  })
})
