import fc from 'fast-check'
import { describe, expect, test } from 'vitest'
import { stageResponse, stagesResponse } from '../../src/filter/stage-response.ts'
import { type ButterworthSpec, designStage } from '../../src/filter/stage.ts'
import { stages } from './random-specs.ts'

const spread = (fs: number) => Float64Array.from({ length: 13 }, (_, i) => (fs / 2) * (i / 12) ** 2)

describe('any stage', () => {
  test('is real and not negative when it runs both ways, and real when its delay is compensated', () => {
    fc.assert(
      fc.property(stages, ({ spec, samplingRateHz }) => {
        const stage = designStage(spec, samplingRateHz)
        const { re, im } = stageResponse(stage, spread(samplingRateHz))
        if (stage.passes === 2) re.forEach((value) => expect(value).toBeGreaterThanOrEqual(0))
        if (stage.passes === 2 || stage.leadSamples > 0) im.forEach((value) => expect(value + 0).toBe(0))
      }),
      { seed: 90 },
    )
  })

  test('has the squared gain of one pass when it runs both ways at the design cutoffs', () => {
    fc.assert(
      fc.property(stages, ({ spec, samplingRateHz }) => {
        if (spec.design !== 'butterworth') return
        const one: ButterworthSpec = { ...spec, meaning: 'design', direction: 'forward' }
        const hz = spread(samplingRateHz)
        const single = stageResponse(designStage(one, samplingRateHz), hz)
        const both = stageResponse(designStage({ ...one, direction: 'both' }, samplingRateHz), hz)
        both.re.forEach((value, i) => {
          expect(Math.abs(value - (single.re[i] ** 2 + single.im[i] ** 2))).toBeLessThan(1e-12)
        })
      }),
      { seed: 91 },
    )
  })

  test('repeats with the sampling rate, and is conjugate at negative frequencies', () => {
    fc.assert(
      fc.property(stages, fc.double({ min: 0.01, max: 0.49, noNaN: true }), ({ spec, samplingRateHz }, part) => {
        const stage = designStage(spec, samplingRateHz)
        const f = part * samplingRateHz
        const { re, im } = stageResponse(stage, Float64Array.of(f, -f, f + samplingRateHz))
        expect(Math.abs(re[1] - re[0])).toBeLessThan(1e-12)
        expect(Math.abs(im[1] + im[0])).toBeLessThan(1e-12)
        expect(Math.abs(re[2] - re[0])).toBeLessThan(1e-6)
        expect(Math.abs(im[2] - im[0])).toBeLessThan(1e-6)
      }),
      { seed: 92 },
    )
  })

  test('has the defining sum of its taps as response, with the lead as a phase', () => {
    fc.assert(
      fc.property(stages, ({ spec, samplingRateHz }) => {
        const stage = designStage(spec, samplingRateHz)
        if (!stage.taps) return
        const hz = spread(samplingRateHz)
        const { re, im } = stageResponse(stage, hz)
        hz.forEach((f, i) => {
          let sumRe = 0
          let sumIm = 0
          stage.taps!.forEach((tap, k) => {
            const angle = (-2 * Math.PI * f * (k - stage.leadSamples)) / samplingRateHz
            sumRe += tap * Math.cos(angle)
            sumIm += tap * Math.sin(angle)
          })
          expect(Math.abs(re[i] - sumRe)).toBeLessThan(1e-11)
          expect(Math.abs(im[i] - sumIm)).toBeLessThan(1e-11)
        })
      }),
      { seed: 93 },
    )
  })
})

describe('low cutoffs', () => {
  test('keep twelve digits where the direct form keeps four: 0.01 Hz of order 8 at 4096 Hz', () => {
    const spec: ButterworthSpec = {
      design: 'butterworth',
      pass: 'high',
      order: 8,
      cutoffsHz: [0.01],
      meaning: 'design',
      direction: 'forward',
    }
    const hz = Float64Array.of(0.001, 0.005, 0.01, 0.02, 0.1, 10)
    const { re, im } = stageResponse(designStage(spec, 4096), hz)
    hz.forEach((f, i) => {
      // closed form of the warped Butterworth
      const ratio = Math.tan((Math.PI * 0.01) / 4096) / Math.tan((Math.PI * f) / 4096)
      expect(Math.hypot(re[i], im[i]) * Math.sqrt(1 + ratio ** 16)).toBeCloseTo(1, 12)
    })
  })
})

test('several stages multiply, none is 1', () => {
  const high = designStage({ design: 'amplifier', pass: 'high', order: 1, cutoffHz: 0.1 }, 500)
  const low = designStage({ design: 'moving-average', durationMs: 20, delay: 'causal' }, 500)
  const hz = Float64Array.of(0, 0.1, 7, 200)
  const a = stageResponse(high, hz)
  const b = stageResponse(low, hz)
  const { re, im } = stagesResponse([high, low], hz)
  hz.forEach((_, i) => {
    expect(re[i]).toBeCloseTo(a.re[i] * b.re[i] - a.im[i] * b.im[i], 13)
    expect(im[i]).toBeCloseTo(a.re[i] * b.im[i] + a.im[i] * b.re[i], 13)
  })
  expect(stagesResponse([], hz)).toEqual({ re: new Float64Array(4).fill(1), im: new Float64Array(4) })
})

test('a frequency that is not finite is refused', () => {
  const stage = designStage({ design: 'moving-average', durationMs: 20, delay: 'causal' }, 500)
  expect(() => stageResponse(stage, Float64Array.of(1, NaN))).toThrow('frequenciesHz[1] must be finite, was NaN')
})
