import fc from 'fast-check'
import { describe, expect, test } from 'vitest'
import { designChain } from '../../src/filter/chain.ts'
import { chainCutoffPoints, stageCutoffPoints } from '../../src/filter/cutoff-points.ts'
import { designStage, type StageSpec } from '../../src/filter/stage.ts'
import { gainAt, stageResponse } from '../../src/filter/stage-response.ts'
import { gainOf } from './measure.ts'
import { stages } from './random-specs.ts'

const butterworth = (pass: 'low' | 'high', cutoffHz: number): StageSpec => ({
  design: 'butterworth',
  pass,
  order: 4,
  cutoffsHz: [cutoffHz],
  meaning: 'half-amplitude',
  direction: 'both',
})

describe('any stage', () => {
  test('has exactly those gains at its points', () => {
    fc.assert(
      fc.property(stages, ({ spec, samplingRateHz }) => {
        const stage = designStage(spec, samplingRateHz)
        const { halfAmplitudeHz, halfPowerHz } = stageCutoffPoints(stage)
        for (const hz of halfAmplitudeHz) expect(Math.abs(gainOf(stage, hz) - 0.5)).toBeLessThan(1e-9)
        for (const hz of halfPowerHz) expect(Math.abs(gainOf(stage, hz) - Math.SQRT1_2)).toBeLessThan(1e-9)
        for (const list of [halfAmplitudeHz, halfPowerHz]) expect(list).toEqual([...list].sort((a, b) => a - b))
      }),
      { seed: 110, numRuns: 200 },
    )
  })

  test('has as many points as a fine grid of its gain has crossings', () => {
    fc.assert(
      fc.property(stages, ({ spec, samplingRateHz }) => {
        // a narrower notch falls between the points of this grid
        if (spec.design === 'notch' && spec.bandwidthHz < 0.02 * spec.frequencyHz) return
        const stage = designStage(spec, samplingRateHz)
        const hz = Float64Array.from({ length: 6001 }, (_, i) => (samplingRateHz / 2) * 1e-7 ** (1 - i / 6000))
        const { re, im } = stageResponse(stage, hz)
        const { halfAmplitudeHz } = stageCutoffPoints(stage)
        let crossings = 0
        for (let i = 1; i < hz.length; i++) {
          if (Math.hypot(re[i - 1], im[i - 1]) < 0.5 !== Math.hypot(re[i], im[i]) < 0.5) crossings++
        }
        expect(halfAmplitudeHz.length).toBe(crossings)
      }),
      { seed: 111, numRuns: 60 },
    )
  })
})

test('the stated cutoffs are found again', () => {
  expect(stageCutoffPoints(designStage(butterworth('high', 1), 500)).halfAmplitudeHz[0]).toBeCloseTo(1, 12)
  const sinc: StageSpec = {
    design: 'windowed-sinc',
    pass: 'band',
    cutoffsHz: [1, 30],
    meaning: 'half-power',
    transitionHz: 1,
    window: { name: 'hamming' },
    delay: 'compensated',
  }
  const { halfPowerHz, halfAmplitudeHz } = stageCutoffPoints(designStage(sinc, 500))
  expect(halfPowerHz[0]).toBeCloseTo(1, 9)
  expect(halfPowerHz[1]).toBeCloseTo(30, 8)
  expect(halfAmplitudeHz[0]).toBeLessThan(1)
  expect(halfAmplitudeHz[1]).toBeGreaterThan(30)
})

describe('roll-off', () => {
  test('of a recursive stage is 6.02 dB per octave, pole and pass', () => {
    expect(stageCutoffPoints(designStage(butterworth('low', 30), 500)).rollOff).toEqual({
      kind: 'dB/octave',
      value: 20 * Math.log10(2) * 8,
    })
    const amplifier = designStage({ design: 'amplifier', pass: 'high', order: 1, cutoffHz: 0.1 }, 500)
    const { rollOff } = stageCutoffPoints(amplifier)
    // the measured slope two decades below the cutoff
    const slope = 20 * Math.log10(gainOf(amplifier, 0.002) / gainOf(amplifier, 0.001))
    expect(rollOff.kind === 'dB/octave' && rollOff.value).toBeCloseTo(slope, 2)
  })

  test('of the other designs is in their own measure', () => {
    const rollOffOf = (spec: StageSpec) => stageCutoffPoints(designStage(spec, 500)).rollOff
    expect(rollOffOf({ design: 'moving-average', durationMs: 20, delay: 'compensated' })).toEqual({
      kind: 'nulls',
      everyHz: 50,
    })
    expect(rollOffOf({ design: 'notch', frequencyHz: 50, bandwidthHz: 2, harmonics: 1, direction: 'both' })).toEqual({
      kind: 'notch',
      bandwidthHz: 2,
    })
  })
})

describe('a whole chain', () => {
  test('crosses half-amplitude and half-power where its product of gains does', () => {
    const chain = designChain(
      [
        { design: 'amplifier', pass: 'high', order: 1, cutoffHz: 0.5 },
        butterworth('high', 0.5),
        butterworth('low', 40),
        { design: 'notch', frequencyHz: 10, bandwidthHz: 0.05, harmonics: 0, direction: 'both' },
        { design: 'moving-average', durationMs: 12, delay: 'compensated' },
      ],
      500,
    )
    const { halfAmplitudeHz, halfPowerHz } = chainCutoffPoints(chain)
    // both edges of the band and of the narrow notch in it
    expect(halfAmplitudeHz.length).toBe(4)
    expect(halfPowerHz.length).toBe(4)
    for (const hz of halfAmplitudeHz) expect(gainAt(chain.stages, hz)).toBeCloseTo(0.5, 10)
    for (const hz of halfPowerHz) expect(gainAt(chain.stages, hz)).toBeCloseTo(Math.SQRT1_2, 10)
    expect(halfAmplitudeHz[0]).toBeGreaterThan(0.5)
    expect(halfAmplitudeHz[3]).toBeLessThan(40)
  })

  test('of nothing has no such points, and stages in the data do not count', () => {
    expect(chainCutoffPoints(designChain([], 500))).toEqual({ halfAmplitudeHz: [], halfPowerHz: [] })
    const chain = designChain([{ ...butterworth('high', 1), inData: true }, butterworth('low', 30)], 500)
    expect(chainCutoffPoints(chain).halfAmplitudeHz).toEqual([expect.closeTo(30, 9)])
  })
})
