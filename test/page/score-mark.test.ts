import { describe, expect, test } from 'vitest'
import type { Score } from '../../src/erp/score.ts'
import { scoreMark, scoreText } from '../../src/page/score-mark.ts'
import { timeAxisOf } from '../../src/page/time-axis.ts'

const times = Float64Array.from({ length: 101 }, (_, i) => 4 * i)
const axis = timeAxisOf(times)
const wave = times.map((ms) => 5 * Math.exp(-(((ms - 201) / 40) ** 2)))
const score = (kind: Score['kind'], more: Partial<Score> = {}): Score => ({
  kind,
  fromMs: 150,
  toMs: 260,
  polarity: 'positive',
  ...more,
})

describe('scoreMark', () => {
  test('a mean is a line across its window', () => {
    expect(scoreMark(score('mean'), 2.5, wave, axis)).toEqual({ kind: 'level', fromMs: 150, toMs: 260, uv: 2.5 })
  })

  test('a moment is a dot where it is read', () => {
    expect(scoreMark(score('moment', { fromMs: 120, toMs: 120 }), 1, wave, axis)).toEqual({
      kind: 'point',
      atMs: 120,
      uv: 1,
    })
  })

  test('a peak is a dot at its sample', () => {
    expect(scoreMark(score('peak-amplitude'), 5, wave, axis)).toMatchObject({ kind: 'point', atMs: 200, uv: 5 })
  })

  test('a peak beside a higher flank is not put on the flank', () => {
    const flanked = wave.map((value, i) => value + (times[i] > 230 ? (times[i] - 230) / 5 : 0))
    expect(scoreMark(score('peak-amplitude'), 5, flanked, axis)).toMatchObject({ atMs: 200 })
  })

  test('of two peaks the one of that height is marked', () => {
    const two = times.map((ms) => -3 * Math.exp(-(((ms - 180) / 10) ** 2)) - 4 * Math.exp(-(((ms - 240) / 10) ** 2)))
    expect(scoreMark(score('peak-amplitude', { polarity: 'negative' }), -4, two, axis)).toMatchObject({ atMs: 240 })
  })

  test('a latency is a line through the curve between samples', () => {
    const ramp = times.map((ms) => ms / 10)
    const mark = scoreMark(score('onset-latency'), 173, ramp, axis)
    expect(mark?.kind).toBe('latency')
    expect(mark?.uv).toBeCloseTo(17.3, 12)
  })

  test('an area and a score without a value have no place', () => {
    expect(scoreMark(score('area'), 0.4, wave, axis)).toBeNull()
    expect(scoreMark(score('peak-latency'), 'no peak', wave, axis)).toBeNull()
  })
})

describe('scoreText', () => {
  test('gives the number with its unit, or says why there is none', () => {
    expect(scoreText(-1.188, 'µV')).toBe('−1.19 µV')
    expect(scoreText(134.82, 'ms')).toBe('134.8 ms')
    expect(scoreText(0.7049, 'µV·s')).toBe('0.705 µV·s')
    expect(scoreText('no onset', 'ms')).toBe('no onset')
  })
})
