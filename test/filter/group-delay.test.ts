import fc from 'fast-check'
import { describe, expect, test } from 'vitest'
import {
  stageGroupDelaySeconds,
  stagesGroupDelaySamples,
  stagesGroupDelaySeconds,
} from '../../src/filter/group-delay.ts'
import { type ButterworthSpec, designStage, type Stage } from '../../src/filter/stage.ts'
import { stageResponse } from '../../src/filter/stage-response.ts'
import { stages } from './random-specs.ts'

const low = (order: number, cutoffHz: number): ButterworthSpec => ({
  design: 'butterworth',
  pass: 'low',
  order,
  cutoffsHz: [cutoffHz],
  meaning: 'design',
  direction: 'forward',
})

describe('a Butterworth low-pass at 0 Hz', () => {
  test.each([
    [1, 1],
    [2, 1.4142],
    [3, 2],
    [4, 2.6131],
    [5, 3.2361],
    [6, 3.8637],
    [7, 4.494],
    [8, 5.1258],
  ])('of order %i is delayed by %f/(2·tan(πfc/fs)) samples', (order, wanted) => {
    // Source: analogue values standard; the digital ones follow from the bilinear transform (derived, checked with SciPy)
    const [samples] = stagesGroupDelaySamples([designStage(low(order, 30), 500)], Float64Array.of(0))
    expect(Math.abs(samples * 2 * Math.tan((Math.PI * 30) / 500) - wanted)).toBeLessThan(5e-5)
  })

  test.each([
    [2, 500, 30, 7.414],
    [4, 500, 30, 13.698],
    [8, 1000, 40, 20.2876],
    [1, 250, 1, 159.15],
  ])('of order %i at %i Hz sampling and %i Hz is delayed by %f ms', (order, fs, cutoff, ms) => {
    // Source: as above (derived)
    const [seconds] = stageGroupDelaySeconds(designStage(low(order, cutoff), fs), Float64Array.of(0))
    expect(Math.abs(1000 * seconds - ms)).toBeLessThan(0.004)
  })
})

/** −dφ/dω by a central difference of the response's phase. */
function numerical(stage: Stage, hz: number): number {
  const step = 1e-4 * hz
  const { re, im } = stageResponse(stage, Float64Array.of(hz - step, hz + step))
  return -Math.atan2(im[1] * re[0] - re[1] * im[0], re[0] * re[1] + im[0] * im[1]) / (2 * Math.PI * 2 * step)
}

describe('any stage', () => {
  test('is delayed by the slope of its phase', () => {
    fc.assert(
      fc.property(stages, fc.double({ min: 0.02, max: 0.48, noNaN: true }), ({ spec, samplingRateHz }, part) => {
        const stage = designStage(spec, samplingRateHz)
        const hz = part * samplingRateHz
        const { re, im } = stageResponse(stage, Float64Array.of(hz))
        if (Math.hypot(re[0], im[0]) < 1e-4) return
        const [delay] = stageGroupDelaySeconds(stage, Float64Array.of(hz))
        const slope = numerical(stage, hz)
        expect(Math.abs(delay - slope)).toBeLessThan(1e-3 * Math.abs(delay) + 1e-5 / samplingRateHz)
      }),
      { seed: 96 },
    )
  })

  test('is not delayed when it runs both ways or its delay is compensated', () => {
    fc.assert(
      fc.property(stages, ({ spec, samplingRateHz }) => {
        const stage = designStage(spec, samplingRateHz)
        if (stage.passes === 1 && stage.leadSamples === 0) return
        expect([...stageGroupDelaySeconds(stage, Float64Array.of(0, 1, 40))]).toEqual([0, 0, 0])
      }),
      { seed: 97 },
    )
  })

  test('is finite at 0 Hz and at half the sampling rate', () => {
    fc.assert(
      fc.property(stages, ({ spec, samplingRateHz }) => {
        const stage = designStage(spec, samplingRateHz)
        for (const delay of stageGroupDelaySeconds(stage, Float64Array.of(0, samplingRateHz / 2))) {
          expect(Number.isFinite(delay)).toBe(true)
        }
      }),
      { seed: 98 },
    )
  })
})

test('a minimum-phase kernel is delayed by the slope of its phase, and less than the causal one in its pass band', () => {
  const stage = designStage(
    {
      design: 'windowed-sinc',
      pass: 'low',
      cutoffsHz: [30],
      meaning: 'half-amplitude',
      transitionHz: 10,
      window: { name: 'hamming' },
      delay: 'minimum-phase',
    },
    500,
  )
  for (const hz of [1, 10, 20, 27]) {
    const [delay] = stageGroupDelaySeconds(stage, Float64Array.of(hz))
    expect(delay / numerical(stage, hz)).toBeCloseTo(1, 5)
    expect(delay).toBeLessThan((stage.taps!.length - 1) / 2 / 500)
  }
})

test('several stages add, in seconds and in samples', () => {
  const a = designStage(low(2, 30), 500)
  const b = designStage({ design: 'moving-average', durationMs: 20, delay: 'causal' }, 500)
  const hz = Float64Array.of(0, 10)
  const sum = stagesGroupDelaySeconds([a, b], hz)
  const [first, second] = [a, b].map((stage) => stageGroupDelaySeconds(stage, hz))
  sum.forEach((value, i) => expect(value).toBeCloseTo(first[i] + second[i], 15))
  stagesGroupDelaySamples([a, b], hz).forEach((value, i) => expect(value).toBeCloseTo(500 * sum[i], 12))
  expect([...stagesGroupDelaySeconds([], hz)]).toEqual([0, 0])
})
