import { describe, expect, test } from 'vitest'
import { correctBaseline } from '../../src/erp/baseline.ts'
import { SCENARIOS } from '../../src/erp/scenarios.ts'
import { scoreOf, scoreUnit } from '../../src/erp/score.ts'
import { checkNoise } from '../../src/erp/noise.ts'
import { checkBuiltWaveform, epochTimesMs, waveformAt } from '../../src/erp/waveform.ts'

describe('the scenarios', () => {
  test('are five, each with its own id and title', () => {
    expect(SCENARIOS.length).toBe(5)
    expect(new Set(SCENARIOS.map((s) => s.id)).size).toBe(5)
    expect(new Set(SCENARIOS.map((s) => s.title)).size).toBe(5)
  })

  test.each(SCENARIOS.map((s) => [s.id, s] as const))(
    '%s is sound: its waveform, noise, score and measures exist',
    (_, s) => {
      expect(() => checkBuiltWaveform(s.waveform)).not.toThrow()
      expect(() => checkNoise(s.noise)).not.toThrow()
      const condition = s.waveform.conditions.find((c) => c.name === s.condition)
      if (!condition) throw new Error(`no condition ${s.condition}`)
      const times = epochTimesMs(s.waveform.samplingRateHz, s.waveform.epoch)
      const x = correctBaseline(waveformAt(condition.components, times), times, s.baseline)
      expect(scoreOf(x, times, s.score)).toBeTypeOf('number')
      const { polarity } = s.measure
      expect(scoreOf(x, times, { kind: 'mean', ...s.measure.mean, polarity })).toBeTypeOf('number')
      for (const kind of ['peak-latency', 'area-latency', 'onset-latency'] as const) {
        expect(scoreOf(x, times, { kind, ...s.measure.peak, polarity })).toBeTypeOf('number')
      }
      if (s.limits.score) expect(['%', scoreUnit(s.score.kind)]).toContain(s.limits.score.unit)
      expect(s.sentence.endsWith('.')).toBe(true)
    },
  )

  test('the first one has next to nothing at 80–140 ms before the filter, and a late positivity of 7.9 µV at 400 ms', () => {
    const s = SCENARIOS[0]
    const times = epochTimesMs(s.waveform.samplingRateHz, s.waveform.epoch)
    const x = correctBaseline(waveformAt(s.waveform.conditions[0].components, times), times, s.baseline)
    expect(scoreOf(x, times, s.score)).toBeCloseTo(0.05, 1)
    const peak = { ...s.measure.peak, polarity: s.measure.polarity }
    expect(scoreOf(x, times, { kind: 'peak-amplitude', ...peak })).toBeCloseTo(7.9, 2)
    expect(scoreOf(x, times, { kind: 'peak-latency', ...peak })).toBeCloseTo(400, 6)
    expect(scoreOf(x, times, { kind: 'mean', ...s.measure.mean, polarity: 'positive' })).toBeCloseTo(6.5, 1)
    expect(scoreOf(x, times, { kind: 'onset-latency', ...peak })).toBeCloseTo(293.5, 0)
  })
})
