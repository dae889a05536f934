import fc from 'fast-check'
import { describe, expect, test } from 'vitest'
import { designChain } from '../../src/filter/chain.ts'
import { adjointContinuous, runContinuous, standAlone } from '../../src/filter/stand-alone.ts'
import type { StageSpec } from '../../src/filter/stage.ts'
import { causalChain, chain, signal, zeroPhaseChain } from './arbitrary-chain.ts'
import { padAndRun } from './brute-force.ts'
import { expectClose, largest, sumOfProducts } from './expect-close.ts'

const noise = (n: number) =>
  Float64Array.from({ length: n }, (_, i) => ((i * 7919 + ((i * i) % 1013)) % 2003) / 1001 - 1)

const butterworth = (
  pass: 'low' | 'high',
  order: number,
  cutoffHz: number,
  direction: 'forward' | 'both',
): StageSpec => ({
  design: 'butterworth',
  pass,
  order,
  cutoffsHz: [cutoffHz],
  meaning: 'design',
  direction,
})

describe('runContinuous', () => {
  test('is zero padding until every kernel has died, run by a plain second implementation', () => {
    fc.assert(
      fc.property(chain, signal(1, 120), ({ stages }, x) => {
        const padding = 6000
        const long = padAndRun(stages, x, padding)
        const from = -500
        const to = x.length + 500
        const expected = long.slice(padding + from, padding + to)
        expectClose(runContinuous(stages, x, from, to), expected, 1e-10 * (1 + largest(expected)))
      }),
      { numRuns: 60 },
    )
  })

  test('gives the same samples whichever range is asked for', () => {
    fc.assert(
      fc.property(
        chain,
        signal(1, 60),
        fc.integer({ min: -400, max: 400 }),
        fc.integer({ min: 0, max: 300 }),
        ({ stages }, x, from, length) => {
          const whole = runContinuous(stages, x, -400, 700)
          const part = runContinuous(stages, x, from, from + length)
          const size = 1e-12 * (1 + largest(whole))
          expectClose(part, whole.slice(from + 400, from + 400 + length), size)
        },
      ),
    )
  })

  test('crosses long gaps to both sides', () => {
    const { stages } = designChain([butterworth('high', 2, 0.01, 'both'), butterworth('low', 3, 30, 'both')], 1000)
    const x = noise(300)
    const whole = runContinuous(stages, x, -60_000, 60_000)
    const size = largest(whole.subarray(0, 1000))
    expect(size).toBeGreaterThan(1e-7)
    expectClose(runContinuous(stages, x, -60_000, -59_000), whole.slice(0, 1000), 1e-11 * size)
    expectClose(runContinuous(stages, x, 59_000, 60_000), whole.slice(119_000), 1e-11 * size)
    // far beyond everything, at once
    expect(largest(runContinuous(stages, x, 1e12, 1e12 + 10))).toBeLessThan(1e-200)
  })

  test('of an order-12 filter at 0.01 Hz, 4096 Hz, keeps what long zero padding gives, where padding takes millions', () => {
    const { stages } = designChain([butterworth('high', 12, 0.01, 'both')], 4096)
    const x = Float64Array.from({ length: 2000 }, (_, i) => 20_000 + Math.sin(i / 7) * 10)
    const y = runContinuous(stages, x, 0, 2000)
    // the same by running 8 million samples of zeros after the waveform: 1e-12 of the input
    const padded = runContinuous(stages, x, 0, 8_000_000).subarray(0, 2000)
    expectClose(y, Float64Array.from(padded), 1e-12 * largest(x))
  })

  test('of no stage is the waveform with zeros around it', () => {
    expect(runContinuous([], Float64Array.of(1, 2, 3), -2, 5)).toEqual(Float64Array.of(0, 0, 1, 2, 3, 0, 0))
    expect(runContinuous([], Float64Array.of(1, 2, 3), 1, 1)).toEqual(new Float64Array(0))
    expect(runContinuous([], new Float64Array(0), -1, 1)).toEqual(Float64Array.of(0, 0))
    expect(runContinuous([], Float64Array.of(1), 50_000, 50_002)).toEqual(Float64Array.of(0, 0))
  })

  test('of zeros is zeros', () => {
    const { stages } = designChain([butterworth('high', 2, 1, 'both')], 500)
    expect(runContinuous(stages, new Float64Array(9), -3, 12)).toEqual(new Float64Array(15))
  })

  test('refuses missing values and ranges that are none', () => {
    expect(() => runContinuous([], Float64Array.of(0, NaN), 0, 2)).toThrow('x[1] must be a finite number, was NaN')
    expect(() => runContinuous([], Float64Array.of(0), 2, 1)).toThrow('to must not lie before from (2), was 1')
    expect(() => runContinuous([], Float64Array.of(0), 0.5, 1)).toThrow(
      'from must be a whole number of samples, was 0.5',
    )
    expect(() => runContinuous([], Float64Array.of(0), 0, 1e12)).toThrow(RangeError)
  })
})

describe('properties', () => {
  test('linearity', () => {
    fc.assert(
      fc.property(chain, signal(40, 40), signal(40, 40), ({ stages }, a, b) => {
        const mixed = a.map((value, i) => 3 * value - 0.7 * b[i])
        const ya = runContinuous(stages, a, -50, 90)
        const yb = runContinuous(stages, b, -50, 90)
        const expected = ya.map((value, i) => 3 * value - 0.7 * yb[i])
        const size = 1 + 3 * largest(a) + 0.7 * largest(b)
        expectClose(runContinuous(stages, mixed, -50, 90), expected, 1e-12 * size * gainBound)
      }),
    )
  })

  test('time shift: a waveform that comes later gives the same output later', () => {
    fc.assert(
      fc.property(chain, signal(30, 30), fc.integer({ min: 1, max: 200 }), ({ stages }, x, shift) => {
        const later = new Float64Array(x.length + shift)
        later.set(x, shift)
        const actual = runContinuous(stages, later, shift - 40, shift + 70)
        expectClose(actual, runContinuous(stages, x, -40, 70), 1e-12 * (1 + largest(x)) * gainBound)
      }),
    )
  })

  test('zero phase: reversed time gives the reversed output', () => {
    fc.assert(
      fc.property(zeroPhaseChain, signal(30, 30), ({ stages }, x) => {
        const actual = runContinuous(stages, x.slice().reverse(), -100, 130).reverse()
        expectClose(actual, runContinuous(stages, x, -100, 130), 1e-11 * (1 + largest(x)))
      }),
    )
  })

  test('causality: the output before the first sample that is not zero is exactly 0', () => {
    // Source: Rousselet 2012, Front Psychol 3:131, for the statement (seen); D7
    fc.assert(
      fc.property(causalChain, signal(1, 200), fc.integer({ min: 0, max: 300 }), ({ stages }, x, silence) => {
        const later = new Float64Array(silence + x.length)
        later.set(x, silence)
        const y = runContinuous(stages, later, -50, later.length)
        expect(y.subarray(0, silence + 50).every((value) => value === 0)).toBe(true)
      }),
    )
  })

  test('the adjoint moves the weights: Σ w·Kx = Σ Kᵀw·x, with both on the whole axis', () => {
    fc.assert(
      fc.property(chain, signal(1, 80), signal(1, 80), fc.integer({ min: -100, max: 100 }), ({ stages }, x, w, at) => {
        const y = runContinuous(stages, x, at, at + w.length)
        const score = sumOfProducts(w, y)
        const g = adjointContinuous(stages, w, -at, -at + x.length)
        const traced = sumOfProducts(g, x)
        const size = Math.max(score.absolute, traced.absolute)
        // beside the products, rounding scales with what the whole waveform puts into each sample
        expect(Math.abs(score.sum - traced.sum)).toBeLessThanOrEqual(1e-12 * (size + largest(w) * largest(x)))
      }),
    )
  })
})

/** No chain of three stages here amplifies rounding errors by more. */
const gainBound = 30

test('the same stages are made ready once, others apart', () => {
  const { stages } = designChain([butterworth('high', 2, 1, 'both'), butterworth('low', 2, 30, 'forward')], 500)
  expect(standAlone(stages)).toBe(standAlone(stages.slice()))
  expect(standAlone(stages.slice(0, 1))).not.toBe(standAlone(stages))
})
