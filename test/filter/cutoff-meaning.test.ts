import fc from 'fast-check'
import { describe, expect, test } from 'vitest'
import { designCutoffsHz, gainOfMeaning } from '../../src/filter/cutoff-meaning.ts'
import { type ButterworthSpec, designStage } from '../../src/filter/stage.ts'
import { warpedRatio } from '../../src/filter/warped-axis.ts'
import { decibels, gainOf } from './measure.ts'
import { butterworths } from './random-specs.ts'

const spec = (change: Partial<ButterworthSpec>): ButterworthSpec => ({
  design: 'butterworth',
  pass: 'low',
  order: 2,
  cutoffsHz: [30],
  meaning: 'half-power',
  direction: 'both',
  ...change,
})

describe('two passes', () => {
  test.each([1, 2, 4])('have −6.0206 dB at the design cutoff, order %i', (order) => {
    // Source: Winter, Biomechanics and Motor Control of Human Movement (from memory, high)
    for (const pass of ['low', 'high'] as const) {
      expect(decibels(spec({ pass, order, meaning: 'design' }), 500, 30)).toBeCloseTo(-6.0206, 4)
    }
  })

  test('need the factor 0.802 on the warped cutoff at order 2', () => {
    // Source: Winter, 4th ed., p. 69; Robertson et al., Research Methods in Biomechanics, 2nd ed., p. 288, both as reported at
    // codeproject.com/Articles/1267916 (seen)
    expect(warpedRatio(Math.SQRT1_2, 2, 2)).toBeCloseTo(0.802243, 6)
    const wanted = [0.6436, 0.8022, 0.8634, 0.8957, 0.9156, 0.9292, 0.939, 0.9464]
    // Source: the same formula for other orders (derived, checked)
    wanted.forEach((c, i) => expect(Math.abs(warpedRatio(Math.SQRT1_2, 2, i + 1) - c)).toBeLessThan(5.1e-5))
  })

  test.each([
    [1, 1000, 30, 46.41983],
    [1, 500, 30, 45.86036],
    [1, 250, 100, 108.59544],
    [1, 100, 6, 9.17207],
    [2, 1000, 30, 37.33411],
    [2, 500, 30, 37.15442],
    [2, 250, 100, 104.7085],
    [2, 100, 6, 7.43088],
    [4, 1000, 30, 33.46972],
    [4, 500, 30, 33.3975],
    [4, 250, 100, 102.46351],
    [4, 100, 6, 6.6795],
  ])('order %i at %i Hz sampling: half-power %f Hz asks for a design cutoff of %f Hz', (order, fs, cutoff, wanted) => {
    // Source: computed with SciPy (derived)
    const low = spec({ order, cutoffsHz: [cutoff] })
    expect(Math.abs(designCutoffsHz(low, fs)[0] - wanted)).toBeLessThan(6e-6)
    expect(decibels(low, fs, cutoff)).toBeCloseTo(10 * Math.log10(0.5), 9)
  })

  test.each([
    [1, 0.3217996],
    [2, 0.4011235],
    [4, 0.4478413],
  ])('order %i: a high-pass of half-power 0.5 Hz asks for a design cutoff of %f Hz', (order, wanted) => {
    // Source: computed with SciPy (derived)
    const high = spec({ pass: 'high', order, cutoffsHz: [0.5] })
    expect(Math.abs(designCutoffsHz(high, 250)[0] - wanted)).toBeLessThan(6e-8)
  })

  test.each([
    [1000, 30, -2.9936],
    [500, 30, -2.9428],
  ])('miss half-power where the factor is put on the unwarped cutoff: %i Hz sampling, %i Hz', (fs, cutoff, wanted) => {
    // Source: warning at codeproject.com/Articles/1267916 (seen), sizes computed with SciPy
    const shortcut = spec({ cutoffsHz: [cutoff / warpedRatio(Math.SQRT1_2, 2, 2)], meaning: 'design' })
    expect(decibels(shortcut, fs, cutoff)).toBeCloseTo(wanted, 4)
  })
})

test('an uncorrected two-pass low-pass has its half-power point at C times the warped design cutoff', () => {
  // Source: the same formula (derived, checked)
  for (let order = 1; order <= 8; order++) {
    const stage = designStage(spec({ order, meaning: 'design' }), 500)
    const warped = warpedRatio(Math.SQRT1_2, 2, order) * Math.tan((Math.PI * 30) / 500)
    expect(gainOf(stage, (500 / Math.PI) * Math.atan(warped))).toBeCloseTo(Math.SQRT1_2, 10)
  }
})

describe('any Butterworth', () => {
  test('has the stated gain within 1e-6 of each stated cutoff, measured on the response', () => {
    fc.assert(
      fc.property(butterworths, ({ spec, samplingRateHz }) => {
        const single = spec.direction === 'forward' ? Math.SQRT1_2 : 0.5
        const wanted = gainOfMeaning(spec.meaning) ?? single
        const stage = designStage(spec, samplingRateHz)
        spec.cutoffsHz.forEach((cutoff) => {
          expect(Math.abs(gainOf(stage, cutoff) - wanted)).toBeLessThan(1e-9)
          const around = [1 - 1e-6, 1 + 1e-6].map((factor) => gainOf(stage, cutoff * factor) - wanted)
          expect(around[0] * around[1]).toBeLessThan(0)
        })
      }),
      { seed: 20, numRuns: 300 },
    )
  })

  test('is the same filter when its design cutoffs are stated as such', () => {
    fc.assert(
      fc.property(butterworths, ({ spec, samplingRateHz }) => {
        const cutoffsHz = designCutoffsHz(spec, samplingRateHz)
        // a design edge may lie so close to half the sampling rate that Hz cannot hold it
        if (cutoffsHz[cutoffsHz.length - 1] > 0.499 * samplingRateHz) return
        const stated = designStage(spec, samplingRateHz)
        const designed = designStage({ ...spec, cutoffsHz, meaning: 'design' }, samplingRateHz)
        for (const part of [0.001, 0.01, 0.1, 0.3]) {
          const [a, b] = [stated, designed].map((stage) => gainOf(stage, part * samplingRateHz))
          expect(Math.abs(a - b)).toBeLessThan(1e-9)
        }
      }),
      { seed: 21 },
    )
  })
})

test('amplifiers and notches have their half-power points as design cutoffs, moving averages none', () => {
  expect(designCutoffsHz({ design: 'amplifier', pass: 'high', order: 1, cutoffHz: 0.1 }, 500)).toEqual([0.1])
  const [low, high] = designCutoffsHz(
    { design: 'notch', frequencyHz: 50, bandwidthHz: 2, harmonics: 0, direction: 'forward' },
    500,
  )
  expect(high - low).toBeCloseTo(2, 10)
  expect(designCutoffsHz({ design: 'moving-average', durationMs: 20, delay: 'causal' }, 500)).toEqual([])
})
