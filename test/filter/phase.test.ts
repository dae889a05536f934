import fc from 'fast-check'
import { describe, expect, test } from 'vitest'
import { stagePhaseRad, stagesPhaseRad } from '../../src/filter/phase.ts'
import { designStage, type StageSpec } from '../../src/filter/stage.ts'
import { stageResponse } from '../../src/filter/stage-response.ts'
import { stages } from './random-specs.ts'

describe('one pass of a Butterworth', () => {
  test.each([1, 2, 3, 4, 8, 12])(
    'lags by 45° times its order at the cutoff as a low-pass, leads as a high-pass: %i',
    (order) => {
      // Source: standard (from memory, high)
      for (const pass of ['low', 'high'] as const) {
        const spec: StageSpec = {
          design: 'butterworth',
          pass,
          order,
          cutoffsHz: [30],
          meaning: 'design',
          direction: 'forward',
        }
        const [phase] = stagePhaseRad(designStage(spec, 500), Float64Array.of(30))
        expect((phase * 180) / Math.PI).toBeCloseTo((pass === 'low' ? -45 : 45) * order, 9)
      }
    },
  )
})

describe('any stage', () => {
  test('has the phase of its response, apart from whole turns', () => {
    fc.assert(
      fc.property(stages, ({ spec, samplingRateHz }) => {
        const stage = designStage(spec, samplingRateHz)
        const hz = Float64Array.from({ length: 9 }, (_, i) => ((i + 0.37) / 18.5) * samplingRateHz)
        const { re, im } = stageResponse(stage, hz)
        stagePhaseRad(stage, hz).forEach((phase, i) => {
          const gain = Math.hypot(re[i], im[i])
          if (gain < 1e-5) return
          expect(Math.abs(Math.cos(phase) - re[i] / gain)).toBeLessThan(1e-6)
          expect(Math.abs(Math.sin(phase) - im[i] / gain)).toBeLessThan(1e-6)
        })
      }),
      { seed: 100 },
    )
  })

  test('has phase 0 when it runs both ways', () => {
    fc.assert(
      fc.property(stages, ({ spec, samplingRateHz }) => {
        const stage = designStage(spec, samplingRateHz)
        if (stage.passes === 2) expect([...stagePhaseRad(stage, Float64Array.of(0, 1, 40))]).toEqual([0, 0, 0])
      }),
      { seed: 101 },
    )
  })
})

test('a causal linear phase is a straight line in its pass band, far beyond one turn', () => {
  const spec: StageSpec = {
    design: 'windowed-sinc',
    pass: 'low',
    cutoffsHz: [100],
    meaning: 'half-amplitude',
    transitionHz: 10,
    window: { name: 'hamming' },
    delay: 'causal',
  }
  const stage = designStage(spec, 500)
  const delay = (stage.taps!.length - 1) / 2 / 500
  const hz = Float64Array.of(0, 10, 50, 90)
  stagePhaseRad(stage, hz).forEach((phase, i) => expect(phase).toBeCloseTo(-2 * Math.PI * hz[i] * delay, 10))
})

test('a minimum-phase kernel is unwrapped from step to step', () => {
  const spec: StageSpec = {
    design: 'windowed-sinc',
    pass: 'low',
    cutoffsHz: [100],
    meaning: 'half-amplitude',
    transitionHz: 4,
    window: { name: 'hamming' },
    delay: 'minimum-phase',
  }
  const stage = designStage(spec, 500)
  const fine = stagePhaseRad(
    stage,
    Float64Array.from({ length: 991 }, (_, i) => i / 10),
  )
  const coarse = stagePhaseRad(
    stage,
    Float64Array.from({ length: 100 }, (_, i) => i),
  )
  for (let i = 1; i < fine.length; i++) expect(Math.abs(fine[i] - fine[i - 1])).toBeLessThan(0.5)
  coarse.forEach((phase, i) => expect(phase).toBeCloseTo(fine[10 * i], 9))
  expect(stagesPhaseRad([stage, stage], Float64Array.of(50))[0]).toBeCloseTo(
    2 * stagePhaseRad(stage, Float64Array.of(50))[0],
    12,
  )
})
