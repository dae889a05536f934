import fc from 'fast-check'
import { describe, expect, test } from 'vitest'
import { chainResponse, designChain } from '../../src/filter/chain.ts'
import { applyChain } from '../../src/filter/apply-chain.ts'
import { chainKernel, kernelOn, stepResponseOn } from '../../src/filter/kernel.ts'
import type { StageSpec } from '../../src/filter/stage.ts'
import { causalChain, chain, singleStage, zeroPhaseChain } from './arbitrary-chain.ts'
import { expectClose, largest } from './expect-close.ts'

const absoluteSum = (values: Float64Array) => values.reduce((total, value) => total + Math.abs(value), 0)

const butterworth = (
  pass: 'low' | 'high',
  order: number,
  cutoffHz: number,
  direction: 'forward' | 'both' = 'both',
): StageSpec => ({ design: 'butterworth', pass, order, cutoffsHz: [cutoffHz], meaning: 'design', direction })

describe('chainKernel', () => {
  test('is what the chain makes of an impulse', () => {
    fc.assert(
      fc.property(chain, fc.integer({ min: 0, max: 199 }), (some, at) => {
        const impulse = new Float64Array(200)
        impulse[at] = 1
        const y = applyChain(some, impulse, 'continuous')
        const { values, start } = chainKernel(some)
        const expected = y.map((_, n) => values[n - at - start] ?? 0)
        // the kernel leaves out up to 1e-9 of its absolute sum
        expectClose(y, expected, 1e-9 * absoluteSum(values))
      }),
      { numRuns: 60 },
    )
  })

  test('its transform is the response', () => {
    fc.assert(
      fc.property(chain, (some) => {
        const { values, start } = chainKernel(some)
        const frequencies = Float64Array.of(0, 0.003, 0.05, 0.1, 0.21, 0.4, 0.5).map((f) => f * some.samplingRateHz)
        const { re, im } = chainResponse(some, frequencies)
        const actualRe = frequencies.map((hz) => transform(values, start, hz / some.samplingRateHz, Math.cos))
        const actualIm = frequencies.map((hz) => -transform(values, start, hz / some.samplingRateHz, Math.sin))
        expectClose(actualRe, re, 2e-9 * absoluteSum(values))
        expectClose(actualIm, im, 2e-9 * absoluteSum(values))
      }),
      { numRuns: 60 },
    )
  })

  test('leaves out at most 1e-9 of the absolute sum and not much less than it could', () => {
    fc.assert(
      fc.property(
        singleStage.filter(({ stages }) => stages[0].analogue !== null),
        (some) => {
          const { values, start } = chainKernel(some)
          const wider = kernelOn(some.stages, start - 3000, start + values.length + 3000)
          const all = absoluteSum(wider)
          expect(all - absoluteSum(values)).toBeLessThanOrEqual(1e-9 * all)
          if (start < 0) expect(Math.abs(values[0])).toBeGreaterThan(1e-12 * largest(values))
        },
      ),
      { numRuns: 40 },
    )
  })

  test('of a causal chain starts at 0, of a zero-phase one is symmetric', () => {
    fc.assert(
      fc.property(causalChain, (some) => {
        expect(chainKernel(some).start).toBe(0)
      }),
    )
    fc.assert(
      fc.property(zeroPhaseChain, ({ stages }) => {
        const values = kernelOn(stages, -300, 301)
        expectClose(values.slice().reverse(), values, 1e-13 * (1 + largest(values)))
      }),
    )
  })

  test('of no stage is one sample of 1', () => {
    expect(chainKernel({ samplingRateHz: 500, stages: [] })).toEqual({ values: Float64Array.of(1), start: 0 })
  })

  test('leaves stages in the data out', () => {
    const some = designChain([{ ...butterworth('high', 2, 1), inData: true }, butterworth('low', 2, 30)], 500)
    expect(chainKernel(some)).toEqual(chainKernel(designChain([butterworth('low', 2, 30)], 500)))
  })
})

describe('stepResponseOn', () => {
  test('is the running sum of the kernel from long before', () => {
    fc.assert(
      fc.property(chain, fc.integer({ min: -300, max: 100 }), ({ stages }, from) => {
        const before = 6000
        const kernel = kernelOn(stages, -before, from + 200)
        let sum = 0
        const expected = kernel.map((value) => (sum += value)).slice(from + before)
        expectClose(stepResponseOn(stages, from, from + 200), expected, 1e-11 * absoluteSum(kernel))
      }),
      { numRuns: 60 },
    )
  })

  test('ends at the gain at 0 Hz and begins at 0', () => {
    fc.assert(
      fc.property(chain, (some) => {
        const { re } = chainResponse(some, Float64Array.of(0))
        const step = stepResponseOn(some.stages, -6000, 6000)
        expect(Math.abs(step[step.length - 1] - re[0])).toBeLessThan(1e-10)
        expect(Math.abs(step[0])).toBeLessThan(1e-10)
      }),
      { numRuns: 40 },
    )
  })

  test('of a zero-phase chain is symmetric about half its end, as it stands about the onset', () => {
    // Source: property of any zero-phase filter, derived; D7: steps k after and k + 1 before the onset sum to the end value
    fc.assert(
      fc.property(zeroPhaseChain, (some) => {
        const { re } = chainResponse(some, Float64Array.of(0))
        const step = stepResponseOn(some.stages, -200, 200)
        const mirrored = step
          .slice()
          .reverse()
          .map((value) => re[0] - value)
        expectClose(step, mirrored, 1e-10)
      }),
    )
  })

  test('of a causal chain is exactly 0 before the step', () => {
    fc.assert(
      fc.property(causalChain, ({ stages }) => {
        expect(
          stepResponseOn(stages, -50, 20)
            .subarray(0, 50)
            .every((value) => value === 0),
        ).toBe(true)
      }),
    )
  })

  test('far from the step needs no more than its end values', () => {
    const { stages } = designChain([butterworth('high', 4, 0.01), butterworth('low', 4, 30)], 4096)
    // the sum over half a million samples before the range comes from the state alone
    const near = stepResponseOn(stages, -1, 1)
    const far = stepResponseOn(stages, -500_000, 1)
    expect(Math.abs(near[0] - far[far.length - 2])).toBeLessThan(1e-11)
  })

  test.each([
    [1, 0],
    [2, 3.47],
    [3, 5.74],
    [4, 6.91],
    [8, 8.39],
  ])(
    'two passes of order %i at 30 Hz, 500 Hz, overshoot by %f %% after and undershoot by as much before',
    (order, percent) => {
      // Source: derived, checked with SciPy; B24
      const { stages } = designChain([butterworth('low', order, 30)], 500)
      const step = stepResponseOn(stages, -200, 200)
      expect(Math.abs((Math.max(...step) - 1) * 100 - percent)).toBeLessThan(0.006)
      expect(Math.abs(-Math.min(...step) * 100 - percent)).toBeLessThan(0.006)
    },
  )
})

function transform(values: Float64Array, start: number, cycles: number, wave: (angle: number) => number): number {
  let sum = 0
  for (let i = 0; i < values.length; i++) sum += values[i] * wave(2 * Math.PI * cycles * (start + i))
  return sum
}
