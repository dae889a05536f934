import fc from 'fast-check'
import { describe, expect, test } from 'vitest'
import { designChain, chainResponse } from '../../src/filter/chain.ts'
import { stageCutoffPoints } from '../../src/filter/cutoff-points.ts'
import { designStage, type StageSpec } from '../../src/filter/stage.ts'
import { causalTwin, zeroPhaseTwin } from '../../src/filter/twins.ts'
import { butterworths, notches, stages } from './random-specs.ts'

const gains = (specs: StageSpec[], fs: number) => {
  const hz = Float64Array.from({ length: 50 }, (_, i) => ((i + 0.5) / 100) ** 3 * 4 * fs)
  const { re, im } = chainResponse(designChain(specs, fs), hz)
  return re.map((value, i) => Math.hypot(value, im[i]))
}

describe('the causal twin', () => {
  test('of a stage that runs both ways is its sections run forward twice, with the same gain', () => {
    fc.assert(
      fc.property(fc.oneof(butterworths, notches), ({ spec, samplingRateHz }) => {
        const both: StageSpec = { ...spec, direction: 'both' }
        const twin = causalTwin(both, samplingRateHz)
        expect(twin.length).toBe(2)
        for (const one of twin) expect(one).toMatchObject({ direction: 'forward' })
        // a design edge that Hz cannot hold near half the sampling rate is no matter here
        if ('cutoffsHz' in both && both.cutoffsHz.some((hz) => hz > 0.4 * samplingRateHz)) return
        const wanted = gains([both], samplingRateHz)
        gains(twin, samplingRateHz).forEach((gain, i) => expect(Math.abs(gain - wanted[i])).toBeLessThan(1e-8))
      }),
      { seed: 80 },
    )
  })

  test('of a compensated kernel is its minimum-phase or causal form', () => {
    const sinc: StageSpec = {
      design: 'windowed-sinc',
      pass: 'low',
      cutoffsHz: [30],
      meaning: 'half-amplitude',
      transitionHz: 10,
      window: { name: 'hamming' },
      delay: 'compensated',
    }
    expect(causalTwin(sinc, 500)).toEqual([{ ...sinc, delay: 'minimum-phase' }])
    const average: StageSpec = { design: 'moving-average', durationMs: 20, delay: 'compensated', inData: true }
    expect(causalTwin(average, 500)).toEqual([{ ...average, delay: 'causal' }])
  })
})

describe('the zero-phase twin', () => {
  test('of a forward stage has the same order, the same cutoffs as applied and twice the roll-off', () => {
    fc.assert(
      fc.property(butterworths, ({ spec, samplingRateHz }) => {
        const forward: StageSpec = { ...spec, direction: 'forward' }
        const [twin] = zeroPhaseTwin(forward, samplingRateHz)
        expect(twin).toMatchObject({ direction: 'both', order: spec.order, cutoffsHz: spec.cutoffsHz })
        const before = stageCutoffPoints(designStage(forward, samplingRateHz))
        const after = stageCutoffPoints(designStage(twin, samplingRateHz))
        const points = spec.meaning === 'half-amplitude' ? 'halfAmplitudeHz' : 'halfPowerHz'
        before[points].forEach((hz, i) => expect(after[points][i] / hz).toBeCloseTo(1, 9))
        if (before.rollOff.kind !== 'dB/octave' || after.rollOff.kind !== 'dB/octave') throw new Error('wrong kind')
        expect(after.rollOff.value).toBe(2 * before.rollOff.value)
      }),
      { seed: 81 },
    )
  })

  test('of a notch has the same width as applied', () => {
    const notch: StageSpec = { design: 'notch', frequencyHz: 50, bandwidthHz: 2, harmonics: 0, direction: 'forward' }
    const [twin] = zeroPhaseTwin(notch, 500)
    const [low, high] = stageCutoffPoints(designStage(twin, 500)).halfPowerHz
    expect(high - low).toBeCloseTo(2, 9)
  })

  test('of a minimum-phase or causal kernel is the compensated one', () => {
    const average: StageSpec = { design: 'moving-average', durationMs: 20, delay: 'causal' }
    expect(zeroPhaseTwin(average, 500)).toEqual([{ ...average, delay: 'compensated' }])
  })
})

test('twins of any stage can be designed, and a causal twin is its own causal twin', () => {
  fc.assert(
    fc.property(stages, ({ spec, samplingRateHz }) => {
      const causal = causalTwin(spec, samplingRateHz)
      for (const one of causal) expect(causalTwin(one, samplingRateHz)).toEqual([one])
      const [zeroPhase] = zeroPhaseTwin(spec, samplingRateHz)
      expect(zeroPhaseTwin(zeroPhase, samplingRateHz)).toEqual([zeroPhase])
    }),
    { seed: 82, numRuns: 40 },
  )
})

test('an amplifier stage has no twin, and a bad stage is refused', () => {
  const amplifier: StageSpec = { design: 'amplifier', pass: 'high', order: 1, cutoffHz: 0.1 }
  expect(causalTwin(amplifier, 500)).toEqual([amplifier])
  expect(zeroPhaseTwin(amplifier, 500)).toEqual([amplifier])
  expect(() => causalTwin({ ...amplifier, cutoffHz: 0 }, 500)).toThrow(RangeError)
})
