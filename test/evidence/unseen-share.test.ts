import fc from 'fast-check'
import { describe, expect, test } from 'vitest'
import { effectiveWindow } from '../../src/evidence/effective-window.ts'
import { shareOutside, unseenShare, unseenShareBySample } from '../../src/evidence/unseen-share.ts'
import { designChain } from '../../src/filter/chain.ts'
import { kernelOn } from '../../src/filter/kernel.ts'
import type { StageSpec } from '../../src/filter/stage.ts'
import { chain, signal } from '../filter/arbitrary-chain.ts'

const highPass = (cutoffHz: number): StageSpec => ({
  design: 'butterworth',
  pass: 'high',
  order: 2,
  cutoffsHz: [cutoffHz],
  meaning: 'half-amplitude',
  direction: 'both',
})

describe('unseenShare', () => {
  test('is the share of the continuous effective window outside the data', () => {
    fc.assert(
      fc.property(chain, signal(20, 80), fc.integer({ min: -60, max: 20 }), fc.nat(120), (some, w, from, length) => {
        const offline = {
          ...some,
          stages: some.stages.filter(({ spec }) => spec.design !== 'amplifier'),
        }
        const expected = shareOutside(effectiveWindow(offline, w, 'continuous'), from, from + length)
        expect(Math.abs(unseenShare(some, w, from, from + length) - expected)).toBeLessThan(1e-4)
      }),
      { numRuns: 60 },
    )
  })

  test('of a mean without baseline grows as the high-pass cutoff falls, in a moment even at 0.01 Hz, 4096 Hz', () => {
    const w = new Float64Array(4096).fill(1 / 400, 2000, 2400)
    const shares = [10, 1, 0.1, 0.01].map((hz) => unseenShare(designChain([highPass(hz)], 4096), w, 0, 4096))
    expect(shares[0]).toBeLessThan(0.01)
    for (let i = 1; i < 4; i++) expect(shares[i]).toBeGreaterThan(shares[i - 1])
    expect(shares[3]).toBeLessThan(1)
  })

  test.each([10, 1, 0.1, 0.02])('with a baseline is that of the whole window at %f Hz, 1000 Hz', (hz) => {
    const w = new Float64Array(1000).fill(1 / 100, 500, 600).map((value, i) => (i < 100 ? -1 / 100 : value))
    const some = designChain([highPass(hz)], 1000)
    const expected = shareOutside(effectiveWindow(some, w, 'continuous'), 0, 1000)
    expect(Math.abs(unseenShare(some, w, 0, 1000) - expected)).toBeLessThan(1e-3 * expected)
  })

  test('is 0 for data without end, for no stage and for weights of zero', () => {
    const some = designChain([highPass(1)], 250)
    const w = Float64Array.from({ length: 100 }, (_, i) => i - 20)
    expect(unseenShare(some, w, -Infinity, Infinity)).toBe(0)
    expect(unseenShare(designChain([], 250), w, 0, 100)).toBe(0)
    expect(unseenShare(some, new Float64Array(100), 0, 100)).toBe(0)
    expect(() => unseenShare(some, w, 10, 0)).toThrow(RangeError)
    expect(() => unseenShare(some, w, NaN, 0)).toThrow(RangeError)
  })

  test('does not count the amplifier', () => {
    const w = Float64Array.from({ length: 100 }, (_, i) => (i > 60 ? 1 : 0))
    const amplifier: StageSpec = { design: 'amplifier', pass: 'high', order: 1, cutoffHz: 0.1 }
    expect(unseenShare(designChain([amplifier], 250), w, 0, 100)).toBe(0)
  })
})

describe('unseenShareBySample', () => {
  test('is the share of each sample’s kernel that looks outside the epoch', () => {
    fc.assert(
      fc.property(chain, fc.integer({ min: 1, max: 150 }), ({ stages }, n) => {
        const shares = unseenShareBySample(stages, n)
        const far = 4000
        const kernel = kernelOn(stages, -far, far + 1)
        const total = kernel.reduce((sum, value) => sum + Math.abs(value), 0)
        for (const i of [0, Math.floor(n / 2), n - 1]) {
          let inside = 0
          for (let m = 0; m < n; m++) inside += Math.abs(kernel[far + i - m])
          expect(Math.abs(shares[i] - (1 - inside / total))).toBeLessThan(1e-4)
        }
      }),
      { numRuns: 40 },
    )
  })

  test('without a stage nothing is unseen; a causal kernel looks only back', () => {
    expect(unseenShareBySample([], 3)).toEqual(new Float64Array(3))
    const { stages } = designChain([{ design: 'moving-average', durationMs: 40, delay: 'causal' }], 100)
    // four taps of 1/4
    expect(Array.from(unseenShareBySample(stages, 5))).toEqual([0.75, 0.5, 0.25, 0, 0])
    expect(() => unseenShareBySample(stages, -1)).toThrow(RangeError)
  })
})

test('shareOutside counts the absolute window outside a range', () => {
  const window = { values: Float64Array.of(1, -2, 3, -4), start: -1 }
  expect(shareOutside(window, 0, 2)).toBeCloseTo(0.5, 15)
  expect(shareOutside(window, -Infinity, Infinity)).toBe(0)
  expect(shareOutside({ values: new Float64Array(3), start: 0 }, 0, 1)).toBe(0)
})
