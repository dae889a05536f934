import fc from 'fast-check'
import { describe, expect, test } from 'vitest'
import { absoluteBefore, absoluteSum, firstAfter, lastBefore } from '../../src/filter/absolute-sum.ts'
import { designChain } from '../../src/filter/chain.ts'
import { kernelOn } from '../../src/filter/kernel.ts'
import { reach } from '../../src/filter/reach.ts'
import { runContinuous } from '../../src/filter/stand-alone.ts'
import type { Stage, StageSpec } from '../../src/filter/stage.ts'
import { chain, signal, zeroPhaseChain } from './arbitrary-chain.ts'

const butterworth = (
  pass: 'low' | 'high',
  order: number,
  cutoffHz: number,
  direction: 'forward' | 'both' = 'both',
): StageSpec => ({ design: 'butterworth', pass, order, cutoffsHz: [cutoffHz], meaning: 'half-amplitude', direction })

/** The definition, sample by sample. */
function reachWrittenOut(stages: readonly Stage[], far: number): { beforeSamples: number; afterSamples: number } {
  const kernel = kernelOn(stages, -far, far + 1).map(Math.abs)
  const total = kernel.reduce((sum, value) => sum + value, 0)
  let before = 0
  let beforeSamples = far
  while (beforeSamples > 0 && before + kernel[far - beforeSamples] <= 0.005 * total) {
    before += kernel[far - beforeSamples]
    beforeSamples--
  }
  let after = 0
  let afterSamples = far
  while (afterSamples > 0 && after + kernel[far + afterSamples] <= 0.005 * total) {
    after += kernel[far + afterSamples]
    afterSamples--
  }
  return { beforeSamples, afterSamples }
}

function expectReach(stages: readonly Stage[], far: number): void {
  const actual = reach(stages)
  const expected = reachWrittenOut(stages, far)
  for (const side of ['beforeSamples', 'afterSamples'] as const) {
    expect(Math.abs(actual[side] - expected[side]), side).toBeLessThanOrEqual(Math.max(1, 1e-3 * expected[side]))
  }
}

describe('reach', () => {
  test('is the definition summed sample by sample', () => {
    fc.assert(
      fc.property(chain, ({ stages }) => expectReach(stages, 5000)),
      { numRuns: 60 },
    )
  })

  test.each([
    ['a 0.1 Hz high-pass and a 30 Hz low-pass', [butterworth('high', 4, 0.1), butterworth('low', 4, 30)], 500, 60_000],
    ['a causal 0.05 Hz high-pass', [butterworth('high', 3, 0.05, 'forward'), butterworth('low', 2, 20)], 250, 60_000],
    ['a 0.01 Hz high-pass of order 2', [butterworth('high', 2, 0.01)], 500, 400_000],
    [
      'a narrow notch',
      [{ design: 'notch', frequencyHz: 50, bandwidthHz: 0.2, harmonics: 1, direction: 'both' } satisfies StageSpec],
      1000,
      60_000,
    ],
    [
      'a 10 s amplifier',
      [
        { design: 'amplifier', pass: 'high', order: 1, cutoffHz: 0.016 } satisfies StageSpec,
        butterworth('high', 2, 0.1),
        butterworth('low', 4, 30),
      ],
      500,
      150_000,
    ],
  ])('of %s to a sample or one part in a thousand', (_, specs, samplingRateHz, far) => {
    expectReach(designChain(specs as StageSpec[], samplingRateHz).stages, far)
  })

  test('is bounded in time at 0.01 Hz, 4096 Hz, where the kernel lasts for millions of samples', () => {
    const { stages } = designChain([butterworth('high', 4, 0.01), butterworth('low', 4, 30)], 4096)
    const { beforeSamples, afterSamples } = reach(stages)
    expect(beforeSamples).toBeGreaterThan(300_000)
    expect(Math.abs(beforeSamples - afterSamples)).toBeLessThan(1e-3 * beforeSamples)
    // the nodes are what is computed: a small part of the kernel
    expect(absoluteSum(stages, Float64Array.of(1)).at.length).toBeLessThan(20_000)
  })

  test.each([0.1, 0.01, 1e-4, 1e-7])(
    'of a notch of %f Hz that rings for long follows from its decay',
    (bandwidthHz) => {
      // One pass: the impulse itself is 1, and beside it h = 2·α·cos(ωn)·exp(−αn) with α = πB/fs, whose absolute sum is 4/π
      // where α is small: the last 0.5 % of 1 + 4/π begin where exp(−αn) = 0.005·(1 + π/4).
      const { stages } = designChain(
        [{ design: 'notch', frequencyHz: 50, bandwidthHz, harmonics: 0, direction: 'forward' }],
        4096,
      )
      const { beforeSamples, afterSamples } = reach(stages)
      const lag = Math.log(1 / (0.005 * (1 + Math.PI / 4))) / ((Math.PI * bandwidthHz) / 4096)
      expect(beforeSamples).toBe(0)
      expect(Math.abs(afterSamples / lag - 1)).toBeLessThan(1e-3)
    },
  )

  test('of a windowed sinc is at most its half length, of a causal one starts at 0, of no stage is 0', () => {
    const sinc = (delay: 'compensated' | 'causal'): StageSpec => ({
      design: 'windowed-sinc',
      pass: 'low',
      cutoffsHz: [30],
      meaning: 'design',
      transitionHz: 10,
      window: { name: 'hamming' },
      delay,
    })
    const compensated = reach(designChain([sinc('compensated')], 500).stages)
    expect(compensated.beforeSamples).toBe(compensated.afterSamples)
    expect(compensated.beforeSamples).toBeLessThanOrEqual(82)
    expect(reach(designChain([sinc('causal')], 500).stages).beforeSamples).toBe(0)
    expect(reach([])).toEqual({ beforeSamples: 0, afterSamples: 0 })
  })

  test('of a zero-phase chain is the same on both sides', () => {
    fc.assert(
      fc.property(zeroPhaseChain, ({ stages }) => {
        const { beforeSamples, afterSamples } = reach(stages)
        expect(Math.abs(beforeSamples - afterSamples)).toBeLessThanOrEqual(1)
      }),
    )
  })
})

describe('absoluteSum', () => {
  test('is the running sum of the absolute output', () => {
    fc.assert(
      fc.property(chain, signal(1, 60), fc.integer({ min: -300, max: 400 }), ({ stages }, x, n) => {
        const y = runContinuous(stages, x, -5000, 5000).map(Math.abs)
        const total = y.reduce((sum, value) => sum + value, 0)
        const before = y.subarray(0, n + 5000).reduce((sum, value) => sum + value, 0)
        const sum = absoluteSum(stages, x)
        expect(Math.abs(sum.total - total)).toBeLessThanOrEqual(1e-4 * total)
        expect(Math.abs(absoluteBefore(sum, n) - before)).toBeLessThanOrEqual(1e-4 * total)
      }),
      { numRuns: 60 },
    )
  })

  test('finds the samples between which a sum lies', () => {
    // |y| = 1, 3, 2 at 0, 1, 2
    const sum = absoluteSum([], Float64Array.of(-1, 3, 2))
    expect([-1, 0, 1, 2, 3, 4].map((n) => absoluteBefore(sum, n))).toEqual([0, 0, 1, 4, 6, 6])
    expect([0, 0.5, 1, 3.9, 4, 5.9].map((most) => lastBefore(sum, most))).toEqual([0, 0, 1, 1, 2, 2])
    expect([0, 1.9, 2, 4.9, 5, 6].map((most) => firstAfter(sum, most))).toEqual([3, 3, 2, 2, 1, 0])
  })

  test('of zeros is 0 everywhere', () => {
    const sum = absoluteSum([], new Float64Array(5))
    expect(sum.total).toBe(0)
    expect(absoluteBefore(sum, 3)).toBe(0)
  })
})
