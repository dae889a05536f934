import fc from 'fast-check'
import { describe, expect, test } from 'vitest'
import { hzToTimeConstant, timeConstantToHz } from '../../src/filter/amplifier.ts'
import { stagePhaseRad } from '../../src/filter/phase.ts'
import { type AmplifierSpec, designStage } from '../../src/filter/stage.ts'
import { gainOf, runSections } from './measure.ts'
import { amplifiers } from './random-specs.ts'

const highPass = (cutoffHz: number): AmplifierSpec => ({ design: 'amplifier', pass: 'high', order: 1, cutoffHz })

describe('time constants', () => {
  test('0.5 s is 0.318 Hz, 10 s is 0.016 Hz', () => {
    // Sources: abreteegpracticequestions.examzify.com (0.5 s) and Sensors 2021, 21:4485, table 1 (10 s), as reported (seen)
    expect(timeConstantToHz(0.5)).toBeCloseTo(0.318, 3)
    expect(timeConstantToHz(10)).toBeCloseTo(0.016, 3)
    expect(timeConstantToHz(1)).toBeCloseTo(0.15915, 5)
  })

  test.each([
    [0.01, 15.915],
    [0.03, 5.305],
    [0.05, 3.183],
    [0.1, 1.592],
    [0.16, 0.995],
    [0.3, 0.531],
    [0.5, 0.318],
    [1, 0.159],
    [1.6, 0.0995],
    [2, 0.0796],
    [3, 0.0531],
    [5, 0.0318],
    [10, 0.0159],
    [30, 0.00531],
  ])('%f s is %f Hz', (seconds, hz) => {
    // Source: standard clinical tables (from memory, high; checked)
    expect(Math.abs(timeConstantToHz(seconds) / hz - 1)).toBeLessThan(0.004)
    expect(hzToTimeConstant(timeConstantToHz(seconds))).toBeCloseTo(seconds, 12)
  })

  test('3 Hz is 0.053 s, not 0.159 s', () => {
    // Source: abreteeg.examzify.com works 1/(2π·3) out as 0.159 s, which is wrong by a factor of 3 (error seen, checked)
    expect(hzToTimeConstant(3)).toBeCloseTo(0.05305, 5)
  })

  test.each([0, -1, NaN, Infinity])('%f is refused', (value) => {
    expect(() => timeConstantToHz(value)).toThrow(`timeConstantS must be a positive number, was ${value}`)
    expect(() => hzToTimeConstant(value)).toThrow(`cutoffHz must be a positive number, was ${value}`)
  })
})

describe('a first-order high-pass', () => {
  test('cuts the amplitude at its cutoff by 29.29 %, and so does a low-pass of 70 Hz', () => {
    // Source: neurodiagnosticniche.com/2021/11/01/filters-quick-tip: about 30 % (seen, checked)
    expect(1 - gainOf(designStage(highPass(1), 500), 1)).toBeCloseTo(0.2929, 4)
    expect(1 - gainOf(designStage({ design: 'amplifier', pass: 'low', order: 1, cutoffHz: 70 }, 500), 70)).toBeCloseTo(
      0.2929,
      4,
    )
  })

  test.each([
    [0.1, 0.0995, 84.289],
    [0.5, 0.4472, 63.435],
    [1, 0.7071, 45],
    [2, 0.8944, 26.565],
    [5, 0.9806, 11.31],
    [10, 0.995, 5.711],
  ])('at %f times its cutoff has gain %f and a lead of %f degrees', (ratio, gain, lead) => {
    // Source: r/√(1 + r²) and atan(1/r) (derived)
    const stage = designStage(highPass(1), 4096)
    expect(gainOf(stage, ratio)).toBeCloseTo(gain, 4)
    expect((stagePhaseRad(stage, Float64Array.of(ratio))[0] * 180) / Math.PI).toBeCloseTo(lead, 2)
  })

  test.each([
    [0.1, 0.99502, 0.367873],
    [0.3, 0.99834, 0.367879],
    [1, 0.9995, 0.367879],
  ])('of τ = %f s lets a step decay to 37 %% in one τ', (tau, first, ratio) => {
    // Source: calibration practice (from memory, high); digital values computed with SciPy
    const { sections } = designStage(highPass(timeConstantToHz(tau)), 1000)
    const samples = Math.round(1000 * tau)
    const step = runSections(sections!, new Float64Array(3 * samples + 1).fill(1))
    expect(step[0]).toBeCloseTo(first, 5)
    expect(step[samples] / step[0]).toBeCloseTo(ratio, 6)
    expect(step[2 * samples] / step[0]).toBeCloseTo(0.1353, 4)
    expect(step[3 * samples] / step[0]).toBeCloseTo(0.0498, 4)
  })

  test.each([
    [0.3, 0.1, 28.35],
    [0.3, 0.3, 63.21],
    [1, 0.3, 25.92],
    [10, 0.3, 2.96],
  ])('of τ = %f s lets a pulse of %f s droop by %f %% and undershoot as much', (tau, seconds, percent) => {
    // Source: 1 − exp(−T/τ) (derived)
    const { sections } = designStage(highPass(timeConstantToHz(tau)), 4096)
    const length = Math.round(seconds * 4096)
    const pulse = new Float64Array(length + 10).fill(1, 0, length)
    const y = runSections(sections!, pulse)
    expect(Math.abs(100 * (1 - y[length - 1] / y[0]) - percent)).toBeLessThan(0.2)
    expect(Math.abs(-100 * y[length] - percent)).toBeLessThan(0.2)
  })

  test('leaves no area: a Gaussian of 2.0053 µV·s sums to nothing', () => {
    // Source: the gain at 0 Hz is 0 (derived, checked)
    const fs = 500
    const gaussian = Float64Array.from(
      { length: 40 * fs },
      (_, i) => 10 * Math.exp(-0.5 * ((i / fs - 0.4) / 0.08) ** 2),
    )
    const area = gaussian.reduce((sum, x) => sum + x, 0) / fs
    expect(area).toBeCloseTo(2.0053, 4)
    const filtered = runSections(designStage(highPass(timeConstantToHz(0.3)), fs).sections!, gaussian)
    expect(Math.abs(filtered.reduce((sum, y) => sum + y, 0) / fs)).toBeLessThan(1e-10)
  })

  test.each([
    [1, 125],
    [2, 36.896],
    [5, 6.283],
    [10, 1.586],
  ])('of 1 Hz leads by atan(1/f)/(2πf): at %f Hz by %f ms', (hz, ms) => {
    // Source: the formula (derived); that non-linear phase lags by a frequency-dependent time: Yael, Vecht & Bar-Gad 2018, eNeuro 5(2)
    const lead = stagePhaseRad(designStage(highPass(1), 4096), Float64Array.of(hz))[0] / (2 * Math.PI * hz)
    expect(Math.abs(1000 * lead - ms)).toBeLessThan(0.002)
  })
})

test('any amplifier stage has half power at its cutoff, and runs once', () => {
  fc.assert(
    fc.property(amplifiers, ({ spec, samplingRateHz }) => {
      const stage = designStage(spec, samplingRateHz)
      expect(stage.passes).toBe(1)
      expect(gainOf(stage, spec.cutoffHz)).toBeCloseTo(Math.SQRT1_2, 10)
    }),
    { seed: 40 },
  )
})

test.each([
  [{ order: 9 }, 'order must be a whole number from 1 to 8, was 9'],
  [{ pass: 'band' }, 'pass must be one of low, high, was "band"'],
  [{ cutoffHz: 300 }, 'cutoffHz must lie between 0 and 250 (half the sampling rate), was 300'],
])('an amplifier with %o is refused', (change, message) => {
  expect(() => designStage({ ...highPass(1), ...change } as AmplifierSpec, 500)).toThrow(message)
})
