import { describe, expect, test } from 'vitest'
import { courseOf, valueAt } from '../../src/page/curve-course.ts'
import { delayDomain, delayPieces, phasePieces } from '../../src/page/frequency-pieces.ts'
import { axisTitle, gainText, hzText } from '../../src/page/frequency-words.ts'
import { floorDb, gainAxis, gainsIn, noiseIn, spectrumIn } from '../../src/page/gain-axis.ts'
import { linearScale, logScale } from '../../src/plot/scale.ts'
import type { FrequencyFigure } from '../../src/state/evaluation.ts'

const array = (...values: number[]) => Float64Array.from(values)
const figure = (gain: Float64Array): FrequencyFigure => {
  const nothing = new Float64Array(gain.length)
  const hz = gain.map((_, i) => i + 1)
  return {
    hz,
    gain,
    stages: [],
    phaseRad: nothing,
    groupDelayMs: nothing,
    before: nothing,
    after: nothing,
    noise: nothing,
    halfAmplitudeHz: [],
    halfPowerHz: [],
  }
}

describe('gainAxis', () => {
  test('an axis in per cent leaves a fifth of room above full gain, and more above a ripple', () => {
    expect(gainAxis(figure(array(0, 1)), 'percent').domain).toEqual([0, 120])
    expect(gainAxis(figure(array(0, 1.1)), 'percent').domain[1]).toBeCloseTo(132, 9)
  })

  test('the halves stand at 50 and 71 per cent, −6.0 and −3.0 dB', () => {
    const percent = gainAxis(figure(array(0, 1)), 'percent')
    expect([percent.halfAmplitude, percent.halfPower]).toEqual([50, 100 * Math.SQRT1_2])
    const dB = gainAxis(figure(array(0, 1)), 'dB')
    expect(dB.halfAmplitude).toBeCloseTo(-6.0206, 4)
    expect(dB.halfPower).toBeCloseTo(-3.0103, 4)
  })
})

describe('floorDb', () => {
  test('a gain that only falls needs no more than −60 dB', () => {
    expect(floorDb(array(1, 0.1, 1e-3, 1e-6, 1e-12))).toBe(-60)
  })

  test('a ripple of the stop band is made visible, down to −120 dB and no further', () => {
    expect(floorDb(array(1, 0, 10 ** (-74 / 20), 0))).toBe(-80)
    expect(floorDb(array(1, 0, 10 ** (-118 / 20), 0))).toBe(-120)
  })

  test('a ripple of rounding errors is none', () => {
    expect(floorDb(array(1, 0, 1e-15, 0, 1e-16))).toBe(-60)
  })
})

describe('curves on the axis', () => {
  test('no gain lies below the axis, so that its line leaves the figure instead of breaking', () => {
    const axis = gainAxis(figure(array(0, 1)), 'dB')
    expect(Array.from(gainsIn('dB', [1, 0.5, 0], axis))).toEqual([0, 20 * Math.log10(0.5), -80])
  })

  test('the largest value of a spectrum stands at full gain in either unit', () => {
    for (const unit of ['percent', 'dB'] as const) {
      const axis = gainAxis(figure(array(0, 1)), unit)
      expect(spectrumIn(unit, [2, 8], 8, axis)[1]).toBe(axis.full)
    }
  })

  test('the noise falls by equal steps for equal ratios and never under the axis', () => {
    const axis = gainAxis(figure(array(0, 1)), 'percent')
    const [a, b, c, d] = noiseIn([1000, 100, 10, 1e-6], axis)
    expect(a - b).toBeCloseTo(b - c, 9)
    expect(a).toBeCloseTo(36, 9)
    expect(d).toBe(0)
  })

  test('spectra of nothing stay at the bottom', () => {
    const axis = gainAxis(figure(array(0, 1)), 'percent')
    expect(Array.from(spectrumIn('percent', [0, 0], 0, axis))).toEqual([0, 0])
    expect(Array.from(noiseIn([0, 0], axis))).toEqual([0, 0])
  })
})

describe('valueAt and courseOf', () => {
  test('between two frequencies a curve is linear over log frequency', () => {
    expect(valueAt([1, 100], [0, 2], 10)).toBeCloseTo(1, 12)
    expect(valueAt([1, 10, 100], [5, 6, 7], 0.5)).toBe(5)
    expect(valueAt([1, 10, 100], [5, 6, 7], 1000)).toBe(7)
  })

  test('a course has a height at every column of the curve and none outside it', () => {
    const x = logScale([0.1, 100], [40, 340])
    const y = linearScale([0, 1], [100, 0])
    const course = courseOf([1, 10, 100], [0, 1, 0], x, y, 40, 300)
    expect(course.length).toBe(301)
    expect(course[99]).toBeNaN()
    expect(course[100]).toBeCloseTo(100, 9)
    expect(course[200]).toBeCloseTo(0, 9)
    expect(course[250]).toBeCloseTo(50, 9)
    expect(course[300]).toBeCloseTo(100, 9)
  })
})

describe('phasePieces and delayPieces', () => {
  const ones = (n: number) => new Float64Array(n).fill(1)

  test('a phase that wraps runs out at one edge and comes in at the other', () => {
    const hz = array(1, 2, 4)
    const { values } = phasePieces({ hz, phaseRad: array(-2.9, -3.3, -3.7), gain: ones(3) })
    expect(values.slice(1, 4)).toEqual([-180, Number.NaN, 180])
    for (const value of values) if (!Number.isNaN(value)) expect(Math.abs(value)).toBeLessThanOrEqual(180)
  })

  test('a half turn is 180, whatever its rounding error', () => {
    const { values } = phasePieces({ hz: array(1, 2), phaseRad: array(Math.PI, -Math.PI + 1e-12), gain: ones(2) })
    expect(values.length).toBe(2)
    for (const value of values) expect(value).toBeCloseTo(180, 6)
  })

  test('where less than 1 % gets through nothing is drawn', () => {
    const data = { hz: array(1, 2, 3), gain: array(1, 0.001, 1) }
    expect(phasePieces({ ...data, phaseRad: array(0, 1, 0) }).values[1]).toBeNaN()
    expect(delayPieces({ ...data, groupDelayMs: array(4, 5, 6) }).values).toEqual([4, Number.NaN, 6])
  })

  test('the axis of delays holds zero and every drawn delay, also where there is none', () => {
    expect(delayDomain([3, Number.NaN, 40])[0]).toBeLessThan(0)
    expect(delayDomain([3, Number.NaN, 40])[1]).toBeGreaterThan(40)
    expect(delayDomain([0, 0])).toEqual([-10, 10])
    expect(delayDomain([])).toEqual([-10, 10])
  })
})

describe('words', () => {
  test('a frequency has three digits, two below a tenth of a hertz, no decimals from 100 on', () => {
    expect([1, 30, 29.14, 0.0159, 0.125, 0.1, 250, 99.96, 9.996].map(hzText)).toEqual([
      '1.00 Hz',
      '30.0 Hz',
      '29.1 Hz',
      '0.016 Hz',
      '0.125 Hz',
      '0.1 Hz',
      '250 Hz',
      '100 Hz',
      '10.0 Hz',
    ])
  })

  test('a gain is said in per cent and in dB', () => {
    expect(gainText(Math.SQRT1_2)).toBe('71 %, −3.0 dB')
    expect(gainText(0.001)).toBe('0.1 %, −60.0 dB')
    expect(gainText(0)).toBe('0.0 %, under −120 dB')
  })

  test('the axis says its quantity where decades are wide, and the unit alone where they are not', () => {
    expect(axisTitle(logScale([0.1, 250], [0, 540]))).toBe('Frequency, Hz')
    expect(axisTitle(logScale([0.001, 1000], [0, 430]))).toBe('Hz')
  })
})
