import fc from 'fast-check'
import { expect, test } from 'vitest'
import { designStage, type MovingAverageSpec } from '../../src/filter/stage.ts'
import { gainOf } from './measure.ts'
import { movingAverages } from './random-specs.ts'

const spec = (durationMs: number, delay: 'compensated' | 'causal'): MovingAverageSpec => ({
  design: 'moving-average',
  durationMs,
  delay,
})

test('20 ms at 500 Hz is ten equal taps, eleven with halved ends when compensated', () => {
  const causal = designStage(spec(20, 'causal'), 500)
  expect([...causal.taps!]).toEqual(new Array(10).fill(0.1))
  expect(causal.leadSamples).toBe(0)
  const compensated = designStage(spec(20, 'compensated'), 500)
  expect([...compensated.taps!]).toEqual([0.05, ...new Array(9).fill(0.1), 0.05])
  expect(compensated.leadSamples).toBe(5)
  expect(designStage(spec(22, 'compensated'), 500).taps!.length).toBe(11)
})

test('any moving average is 1 at 0 Hz and 0 at the multiples of the reciprocal of its duration', () => {
  fc.assert(
    fc.property(movingAverages, ({ spec, samplingRateHz }) => {
      const stage = designStage(spec, samplingRateHz)
      expect(gainOf(stage, 0)).toBeCloseTo(1, 12)
      const first = 1000 / spec.durationMs
      for (let k = 1; k * first <= samplingRateHz / 2 + 1e-9 && k < 40; k++) {
        expect(gainOf(stage, k * first)).toBeLessThan(1e-12)
      }
    }),
    { seed: 60 },
  )
})

test.each([
  [2, 'durationMs must be at least 4 (two samples), was 2'],
  [NaN, 'durationMs must be at least 4 (two samples), was NaN'],
  [1e10, 'durationMs asks for 5000000000 taps; a kernel must not have more than 1048576'],
])('a duration of %f ms is refused', (durationMs, message) => {
  expect(() => designStage(spec(durationMs, 'causal'), 500)).toThrow(message)
})
