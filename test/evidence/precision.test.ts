import { describe, expect, test } from 'vitest'
import { equalTrialsFactor, noiseRow, precisionFactor, varianceOfDifference } from '../../src/evidence/precision.ts'

describe('precisionFactor', () => {
  test('is the ratio of variances', () => {
    expect(precisionFactor(4, 2)).toBe(2)
    expect(precisionFactor(4, 0)).toBe(Infinity)
    expect(() => precisionFactor(-1, 2)).toThrow(/varianceBefore .* was -1/)
    expect(() => precisionFactor(1, NaN)).toThrow(RangeError)
  })
})

describe('equalTrialsFactor', () => {
  test('is 1 for a filter that only scales, whatever its gain', () => {
    for (const gain of [0.1, 0.5, 3])
      expect(equalTrialsFactor(2, 2 * gain ** 2, { before: 5, after: 5 * gain }, 6)).toBeCloseTo(1, 12)
  })

  test('counts the shrinking of the effect: a precision of 13 with an effect of 17.5 % is worth 0.4', () => {
    expect(equalTrialsFactor(13, 1, { before: 8, after: 1.4 }, 8)).toBeCloseTo(0.398, 3)
  })

  test('is not given where the score holds under 20 % of the largest value', () => {
    expect(equalTrialsFactor(2, 1, { before: 1.99, after: 2 }, 10)).toBe('no effect in this window')
    expect(equalTrialsFactor(2, 1, { before: -2.01, after: -2.01 }, 10)).toBe(2)
    expect(equalTrialsFactor(2, 1, { before: 0, after: 0 }, 0)).toBe('no effect in this window')
    expect(() => equalTrialsFactor(2, 1, { before: NaN, after: 0 }, 1)).toThrow(RangeError)
  })
})

describe('noiseRow', () => {
  test('gives standard deviations and both factors', () => {
    const row = noiseRow('µV', 40, 0.81, 0.36, { before: 6, after: 3 }, 8)
    expect(row).toMatchObject({ id: 'noise', group: 'precision', unit: 'µV', trials: 40 })
    expect(row.before).toBeCloseTo(0.9, 12)
    expect(row.after).toBeCloseTo(0.6, 12)
    expect(row.change).toBeCloseTo(-0.3, 12)
    expect(row.precisionFactor).toBeCloseTo(2.25, 12)
    expect(row.equalTrialsFactor).toBeCloseTo(0.5625, 12)
    expect(noiseRow('µV', 40, 0.81, 0.36, null, 8).equalTrialsFactor).toBe('no effect in this window')
  })

  test('variances of independent conditions add', () => expect(varianceOfDifference(0.25, 0.5)).toBe(0.75))
})
