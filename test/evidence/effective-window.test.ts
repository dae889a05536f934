import fc from 'fast-check'
import { describe, expect, test } from 'vitest'
import { effectiveWindow, effectiveWindowOn } from '../../src/evidence/effective-window.ts'
import { applyChain } from '../../src/filter/apply-chain.ts'
import { designChain } from '../../src/filter/chain.ts'
import { applyEpochs } from '../../src/filter/epoch-rules.ts'
import { runContinuous } from '../../src/filter/stand-alone.ts'
import type { StageSpec } from '../../src/filter/stage.ts'
import { chain, signal } from '../filter/arbitrary-chain.ts'
import { expectClose, largest, sumOfProducts } from '../filter/expect-close.ts'

const absoluteSum = (values: Float64Array) => values.reduce((total, value) => total + Math.abs(value), 0)

/** Mean over [from, to) minus mean over [0, baseline). */
function meanWeights(n: number, from: number, to: number, baseline: number): Float64Array {
  const w = new Float64Array(n)
  for (let i = from; i < to; i++) w[i] += 1 / (to - from)
  for (let i = 0; i < baseline; i++) w[i] -= 1 / baseline
  return w
}

const highPass = (cutoffHz: number, direction: 'forward' | 'both' = 'both'): StageSpec => ({
  design: 'butterworth',
  pass: 'high',
  order: 2,
  cutoffsHz: [cutoffHz],
  meaning: 'half-amplitude',
  direction,
})

describe('effectiveWindow', () => {
  test('weighs the unfiltered waveform to the score of the filtered one, alone on the whole axis', () => {
    fc.assert(
      fc.property(chain, signal(300, 300), signal(60, 60), fc.integer({ min: 0, max: 240 }), (some, x, w, at) => {
        // weights inside the waveform, which reaches beyond them on both sides
        const score = sumOfProducts(w, runContinuous(some.stages, x, at, at + 60)).sum
        const { values, start } = effectiveWindow(some, w, 'continuous')
        let traced = 0
        let absolute = 0
        values.forEach((g, i) => {
          const sample = x[at + start + i] ?? 0
          traced += g * sample
          absolute += Math.abs(g * sample)
        })
        // what the window leaves out (1e-9 of Σ|g|) may meet the largest sample
        const leftOut = 1e-9 * absoluteSum(values) * largest(x)
        expect(Math.abs(traced - score)).toBeLessThanOrEqual(1e-9 * absolute + leftOut)
      }),
      { numRuns: 60 },
    )
  })

  test('weighs the epoch to the score of the filtered epoch, padding included', () => {
    fc.assert(
      fc.property(chain, signal(230, 230), signal(230, 230), (some, x, w) => {
        const score = sumOfProducts(w, applyChain(some, x, 'epochs'))
        const { values, start } = effectiveWindow(some, w, 'epochs')
        const inside = values.slice(-start, -start + 230)
        const traced = sumOfProducts(inside, x)
        const size = Math.max(traced.absolute, score.absolute)
        expect(Math.abs(traced.sum - score.sum)).toBeLessThanOrEqual(1e-11 * (1 + size))
      }),
      { numRuns: 60 },
    )
  })

  test('of a mean amplitude with its baseline equals the score to 1e-9 of Σ|g·x|', () => {
    const some = designChain(
      [
        { design: 'amplifier', pass: 'high', order: 1, cutoffHz: 0.1 },
        highPass(0.5),
        { ...highPass(30), pass: 'low', order: 4 } as StageSpec,
      ],
      500,
    )
    const w = meanWeights(500, 250, 300, 100)
    const x = Float64Array.from({ length: 500 }, (_, i) => 8 * Math.exp(-(((i - 300) / 40) ** 2) / 2) + Math.sin(i / 5))
    for (const extent of ['continuous', 'epochs'] as const) {
      const score = sumOfProducts(w, applyChain(some, x, extent)).sum
      const { values, start } = effectiveWindow(some, w, extent)
      const traced = sumOfProducts(values.slice(-start, -start + 500), x)
      expect(Math.abs(traced.sum - score)).toBeLessThanOrEqual(1e-9 * traced.absolute)
    }
  })

  test('under the epochs extent begins before the epoch where an amplifier acted before the cut', () => {
    const specs: StageSpec[] = [{ design: 'amplifier', pass: 'high', order: 1, cutoffHz: 0.3 }, highPass(1)]
    const some = designChain(specs, 250)
    const w = meanWeights(250, 120, 150, 50)
    const { values, start } = effectiveWindow(some, w, 'epochs')
    expect(start).toBeLessThan(0)
    expect(start + values.length).toBe(250)
    // an event train that began long before the epoch
    const x = Float64Array.from({ length: 3000 }, (_, i) => 5 + 10 * Math.sin(i / 37))
    const at = 2700
    const recorded = runContinuous(some.stages.slice(0, 1), x, at, at + 250)
    const score = sumOfProducts(w, applyEpochs(some.stages.slice(1), recorded)).sum
    const traced = sumOfProducts(
      values,
      Float64Array.from(values, (_, i) => x[at + start + i] ?? 0),
    )
    expect(Math.abs(traced.sum - score)).toBeLessThanOrEqual(1e-9 * traced.absolute + 1e-9 * absoluteSum(values) * 15)
  })

  test('without an amplifier is as long as the epoch under the epochs extent', () => {
    const { values, start } = effectiveWindow(designChain([highPass(1)], 250), meanWeights(200, 90, 120, 40), 'epochs')
    expect(start).toBe(0)
    expect(values.length).toBe(200)
  })

  test('leaves stages that are in the data out, and without any stage is the weights', () => {
    const w = meanWeights(100, 50, 60, 20)
    const some = designChain([{ ...highPass(1), inData: true }], 250)
    for (const extent of ['continuous', 'epochs'] as const) {
      expect(effectiveWindow(some, w, extent)).toEqual({ values: w, start: 0 })
    }
  })

  test('leaves out at most 1e-9 of its absolute sum', () => {
    fc.assert(
      fc.property(chain, signal(30, 60), (some, w) => {
        const { values, start } = effectiveWindow(some, w, 'continuous')
        const wider = effectiveWindowOn(some, w, 'continuous', start - 3000, start + values.length + 3000)
        expect(absoluteSum(wider) - absoluteSum(values)).toBeLessThanOrEqual(1e-9 * absoluteSum(wider))
      }),
      { numRuns: 40 },
    )
  })

  test('refuses missing weights and an unknown extent', () => {
    const some = designChain([highPass(1)], 250)
    expect(() => effectiveWindow(some, Float64Array.of(1, NaN), 'continuous')).toThrow(
      'weights[1] must be a finite number',
    )
    expect(() => effectiveWindow(some, new Float64Array(100), 'half' as 'epochs')).toThrow(RangeError)
    expect(() => effectiveWindow(some, new Float64Array(5), 'epochs')).toThrow('the epoch has 5')
  })
})

describe('effectiveWindowOn', () => {
  test('is the same window on another range', () => {
    fc.assert(
      fc.property(
        chain,
        signal(150, 220),
        fc.constantFrom('continuous' as const, 'epochs' as const),
        fc.integer({ min: -400, max: 400 }),
        (some, w, extent, from) => {
          const { values, start } = effectiveWindow(some, w, extent)
          const drawn = effectiveWindowOn(some, w, extent, from, from + 100)
          const expected = drawn.map((_, i) => values[from + i - start] ?? 0)
          expectClose(drawn, expected, 1e-9 * absoluteSum(values))
        },
      ),
      { numRuns: 60 },
    )
  })
})
