import { describe, expect, test } from 'vitest'
import type { WindowSpec } from '../../src/filter/stage.ts'
import { besselI0, checkWindow, halfWindow, kaiserBeta, tapsForTransition } from '../../src/filter/window.ts'

/** Ideal low-pass tap k from the middle, cutoff in rad per sample. */
const ideal = (cutoff: number, k: number) => (k === 0 ? cutoff / Math.PI : Math.sin(cutoff * k) / (Math.PI * k))

describe('Kaiser', () => {
  test('β follows the three branches of the formula', () => {
    // Source: Oppenheim & Schafer, Discrete-Time Signal Processing, ch. 7, restated at numerade.com (seen)
    expect(kaiserBeta(60)).toBeCloseTo(0.1102 * 51.3, 12)
    expect(kaiserBeta(40)).toBeCloseTo(0.5842 * 19 ** 0.4 + 0.07886 * 19, 12)
    expect(kaiserBeta(20)).toBe(0)
    // Source: SciPy docstring, kaiser_beta(65) (seen)
    expect(kaiserBeta(65)).toBeCloseTo(6.20426, 5)
    // Source: Oppenheim & Schafer problem (spec seen at tutorsglobe.com question 5358916, result checked)
    expect(kaiserBeta(40)).toBeCloseTo(3.3953, 4)
    // Source: Oppenheim & Schafer, Kaiser high-pass example (from memory, medium): δ = 0.021 and 0.02
    expect(kaiserBeta(-20 * Math.log10(0.021))).toBeCloseTo(2.597, 3)
    expect(kaiserBeta(-20 * Math.log10(0.02))).toBeCloseTo(2.652, 3)
  })

  test('the low-pass example has its β, I0 and taps', () => {
    // Source: Oppenheim & Schafer, ch. 7, Kaiser low-pass example (from memory, high; numbers checked): M = 37, cutoff π/2
    expect(kaiserBeta(60)).toBeCloseTo(5.65326, 5)
    expect(besselI0(5.653)).toBeCloseTo(49.0369, 3)
    const tap = (n: number) => {
      const x = (n - 18.5) / 18.5
      return (ideal(Math.PI / 2, n - 18.5) * besselI0(5.653 * Math.sqrt(1 - x * x))) / besselI0(5.653)
    }
    expect(tap(0)).toBeCloseTo(-0.000248108, 8)
    expect(tap(17)).toBeCloseTo(0.147542, 6)
    expect(tap(18)).toBeCloseTo(0.449316, 6)
  })

  test('an odd order has an exact zero at half the sampling rate, so that a high-pass needs an even one', () => {
    // Source: Oppenheim & Schafer, Kaiser high-pass example (from memory, medium): M = 25 is useless, M = 26 is not
    const atNyquist = (order: number) => {
      let sum = 0
      for (let n = 0; n <= order; n++) {
        const k = n - order / 2
        const x = k / (order / 2)
        const allPass = k === 0 ? 1 : Math.sin(Math.PI * k) / (Math.PI * k)
        const tap = allPass - ideal(0.425 * Math.PI, k)
        sum += tap * besselI0(2.6 * Math.sqrt(Math.max(0, 1 - x * x))) * (-1) ** n
      }
      return Math.abs(sum / besselI0(2.6))
    }
    expect(atNyquist(25)).toBeLessThan(1e-12)
    expect(atNyquist(26)).toBeGreaterThan(0.9)
    // and ours are always even: an odd number of taps
    expect(tapsForTransition({ name: 'kaiser', attenuationDb: -20 * Math.log10(0.021) }, 0.15, 2) % 2).toBe(1)
  })

  test('lengths are SciPy’s, made odd', () => {
    // Source: SciPy docstrings of kaiserord and kaiser_atten (seen)
    expect(tapsForTransition({ name: 'kaiser', attenuationDb: 65 }, 24, 1000)).toBe(167)
    expect(tapsForTransition({ name: 'kaiser', attenuationDb: 64.4809963 }, 9, 480)).toBe(211)
    expect(tapsForTransition({ name: 'kaiser', attenuationDb: 64.481 }, 9, 480)).toBe(213)
    // Source: SciPy kaiserord(60, 0.2) is 38 (derived, checked)
    expect(tapsForTransition({ name: 'kaiser', attenuationDb: 60 }, 0.2, 2)).toBe(39)
    // Source: Oppenheim & Schafer problem, M = 90 for a transition of 0.05π (result checked)
    expect(tapsForTransition({ name: 'kaiser', attenuationDb: 40 }, 0.05, 2)).toBe(91)
  })

  test('I0 agrees with its integral', () => {
    for (const x of [0, 0.5, 3, 12, 21]) {
      let sum = 0
      const points = 400
      for (let i = 0; i < points; i++) sum += Math.exp(x * Math.cos((2 * Math.PI * i) / points))
      expect(besselI0(x) / (sum / points)).toBeCloseTo(1, 13)
    }
  })
})

describe('the tap rule', () => {
  test.each([
    [500, 0.2, 8250],
    [500, 1, 1650],
    [500, 2, 826],
    [500, 7.5, 220],
    [250, 10, 84],
    [1000, 0.1, 33000],
    [512, 0.2, 8448],
  ])('gives the smallest odd number of taps for a Hamming window: %f Hz sampling, %f Hz', (fs, hz, evenOrder) => {
    // Source: 3.3·fs/width (window table of Ifeachor & Jervis; orders derived); an odd number of taps at least as large
    const taps = tapsForTransition({ name: 'hamming' }, hz, fs)
    expect(taps % 2).toBe(1)
    expect(taps).toBeGreaterThanOrEqual((3.3 * fs) / hz - 1e-6)
    expect(taps - 2).toBeLessThan((3.3 * fs) / hz)
    expect(Math.abs(taps - 1 - evenOrder)).toBeLessThanOrEqual(2)
  })

  test('gives the textbook example 53 taps', () => {
    // Source: Ifeachor & Jervis, Digital Signal Processing, FIR window example (from memory, high): 0.5 kHz of 8 kHz
    expect(tapsForTransition({ name: 'hamming' }, 500, 8000)).toBe(53)
  })

  test('takes an exact odd number as it is, in spite of rounding', () => {
    expect(tapsForTransition({ name: 'hamming' }, 50, 500)).toBe(33)
    expect(tapsForTransition({ name: 'hamming' }, 0.1, 1)).toBe(33)
    expect(tapsForTransition({ name: 'hann' }, 3.1, 33)).toBe(33)
  })
})

describe('window values', () => {
  test('the 53-tap Hamming example has its taps with N − 1 in the denominator', () => {
    // Source: Ifeachor & Jervis (from memory, high; values with N − 1 computed): cutoff 1.75 kHz of 8 kHz
    const half = halfWindow({ name: 'hamming' }, 53)
    const tap = (k: number) => half[k] * ideal(2 * Math.PI * (1750 / 8000), k)
    expect(tap(0)).toBeCloseTo(0.4375, 12)
    expect(tap(1)).toBeCloseTo(0.311147, 6)
    expect(tap(2)).toBeCloseTo(0.060092, 6)
    expect(tap(26)).toBeCloseTo(-0.000905, 6)
    // as printed, with N in the denominator, within the tolerance of that convention
    for (const [k, printed] of [
      [1, 0.31119],
      [2, 0.06012],
      [26, -0.000914],
    ]) {
      expect(Math.abs(tap(k) - printed)).toBeLessThan(5e-5)
    }
  })

  test('the 7-tap Hamming example has its weights, taps and response', () => {
    // Source: Tan, Digital Signal Processing: Fundamentals and Applications, examples 7.3–7.4 (ideal taps seen, rest from memory, high)
    const half = halfWindow({ name: 'hamming' }, 7)
    ;[1, 0.77, 0.31, 0.08].forEach((weight, k) => expect(half[k]).toBeCloseTo(weight, 12))
    const taps = [0, 1, 2, 3].map((k) => half[k] * ideal(Math.PI / 4, k))
    ;[0.25, 0.17331, 0.04934, 0.006].forEach((tap, k) => expect(Math.abs(taps[k] - tap)).toBeLessThan(6e-6))
    const amplitude = (w: number) =>
      taps[0] + 2 * taps.slice(1).reduce((s, tap, i) => s + tap * Math.cos(w * (i + 1)), 0)
    ;[0.7073, 0.48661, 0.15133, 0.01339, -0.00995].forEach((value, i) =>
      expect(Math.abs(amplitude((Math.PI * i) / 4) - value)).toBeLessThan(1e-5),
    )
  })

  test.each<[WindowSpec, number]>([
    [{ name: 'rectangular' }, 1],
    [{ name: 'hann' }, 0],
    [{ name: 'hamming' }, 0.08],
    [{ name: 'blackman' }, 0],
    [{ name: 'kaiser', attenuationDb: 60 }, 1 / besselI0(kaiserBeta(60))],
  ])('%o is 1 in the middle, falls outwards and ends at its floor', (window, end) => {
    const half = halfWindow(window, 101)
    expect(half[0]).toBeCloseTo(1, 14)
    expect(half[50]).toBeCloseTo(end, 14)
    for (let k = 1; k <= 50; k++) expect(half[k]).toBeLessThanOrEqual(half[k - 1])
  })

  test.each([
    [{ name: 'bartlett' }, 'window must be one of rectangular, hann, hamming, blackman, kaiser, was "bartlett"'],
    [undefined, 'window must be one of rectangular, hann, hamming, blackman, kaiser, was undefined'],
    [{ name: 'kaiser', attenuationDb: 5 }, 'attenuationDb must lie between 8 and 200 dB, was 5'],
    [{ name: 'kaiser' }, 'attenuationDb must lie between 8 and 200 dB, was undefined'],
  ])('%o is refused', (window, message) => {
    expect(() => checkWindow(window as WindowSpec)).toThrow(message)
  })
})
