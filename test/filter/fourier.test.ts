import fc from 'fast-check'
import { describe, expect, test } from 'vitest'
import {
  convolve,
  forwardTransform,
  inverseRealTransform,
  inverseTransform,
  nextPowerOfTwo,
  realTransform,
} from '../../src/filter/fourier.ts'

const value = fc.double({ min: -100, max: 100, noNaN: true })
const signal = fc.array(value, { minLength: 1, maxLength: 70 }).map((list) => Float64Array.from(list))

/** N = 1000 samples at 500 Hz of A·cos(2πft + φ). */
const tone = (amplitude: number, hz: number, phase = 0) =>
  Float64Array.from({ length: 1000 }, (_, n) => amplitude * Math.cos((2 * Math.PI * hz * n) / 500 + phase))

/** A seeded, evenly spread sequence in −1 … 1. */
const noise = (length: number) => {
  let state = 17
  return Float64Array.from({ length }, () => {
    state = (state * 1103515245 + 12345) % 2147483648
    return state / 1073741824 - 1
  })
}

describe('known transforms', () => {
  test('Parseval: the sum of squares is the mean of the squared spectrum, and the inverse is exact', () => {
    // Source: textbook (from memory, high): 500 random points return to within 1.4e-15; ours go through a chirp
    const x = noise(500)
    const { re, im } = forwardTransform(x, new Float64Array(500))
    const power = re.reduce((sum, value, k) => sum + value * value + im[k] * im[k], 0) / 500
    expect(power / x.reduce((sum, value) => sum + value * value, 0)).toBeCloseTo(1, 12)
    const back = inverseTransform(re, im)
    x.forEach((value, n) => expect(Math.abs(back.re[n] - value)).toBeLessThan(2e-14))
    const y = noise(512)
    const spectrum = realTransform(y)
    inverseRealTransform(spectrum.re, spectrum.im, 512).forEach((value, n) => {
      expect(Math.abs(value - y[n])).toBeLessThan(2e-15)
    })
  })

  test('a cosine of amplitude 3.7 and phase 0.3 at 10 Hz is 1850 at bin 20, with that phase', () => {
    // Source: textbook (checked)
    const { re, im } = realTransform(tone(3.7, 10, 0.3))
    expect(Math.hypot(re[20], im[20])).toBeCloseTo(1850, 9)
    expect(Math.atan2(im[20], re[20])).toBeCloseTo(0.3, 12)
  })

  test('its one-sided power is A²/2 = 6.845, and half the amplitude is a quarter of it, −6.02 dB', () => {
    // Source: textbook (checked)
    const power = (amplitude: number) => {
      const { re, im } = realTransform(tone(amplitude, 10))
      return (2 * (re[20] ** 2 + im[20] ** 2)) / 1000 ** 2
    }
    expect(power(3.7)).toBeCloseTo(6.845, 10)
    expect(power(1.85) / power(3.7)).toBeCloseTo(0.25, 12)
    expect(10 * Math.log10(power(1.85) / power(3.7))).toBeCloseTo(-6.02, 2)
  })

  test.each([50, 60, 75, 85, 100])('a line at %i Hz stands in its own bin alone', (hz) => {
    // Source: textbook (checked): whole cycles in 1000 samples at 500 Hz, bins of 0.5 Hz
    const { re, im } = realTransform(tone(1, hz))
    re.forEach((value, k) => expect(Math.abs(Math.hypot(value, im[k]) - (k === 2 * hz ? 500 : 0))).toBeLessThan(1e-9))
  })

  test('300 Hz sampled at 500 Hz appears at 200 Hz', () => {
    // Source: textbook (checked)
    const { re } = realTransform(tone(1, 300))
    expect(re[400]).toBeCloseTo(500, 8)
  })
})

describe('any signal', () => {
  test('transforms as the defining sum does, whatever its length', () => {
    fc.assert(
      fc.property(signal, signal, (a, b) => {
        const length = Math.min(a.length, b.length)
        const x = a.slice(0, length)
        const y = b.slice(0, length)
        const { re, im } = forwardTransform(x, y)
        for (let k = 0; k < length; k++) {
          let sumRe = 0
          let sumIm = 0
          for (let n = 0; n < length; n++) {
            const angle = (-2 * Math.PI * ((k * n) % length)) / length
            sumRe += x[n] * Math.cos(angle) - y[n] * Math.sin(angle)
            sumIm += x[n] * Math.sin(angle) + y[n] * Math.cos(angle)
          }
          expect(Math.abs(re[k] - sumRe)).toBeLessThan(1e-10)
          expect(Math.abs(im[k] - sumIm)).toBeLessThan(1e-10)
        }
      }),
      { seed: 70 },
    )
  })

  test('has a real transform equal to the complex one, padded with zeros to any length', () => {
    fc.assert(
      fc.property(signal, fc.nat(40), (x, extra) => {
        const length = x.length + extra
        const padded = new Float64Array(length)
        padded.set(x)
        const { re, im } = realTransform(x, length)
        const full = forwardTransform(padded, new Float64Array(length))
        expect(re.length).toBe(Math.floor(length / 2) + 1)
        re.forEach((value, k) => {
          expect(Math.abs(value - full.re[k])).toBeLessThan(1e-10)
          expect(Math.abs(im[k] - full.im[k])).toBeLessThan(1e-10)
        })
        inverseRealTransform(re, im, length).forEach((value, n) => {
          expect(Math.abs(value - padded[n])).toBeLessThan(1e-11)
        })
      }),
      { seed: 71 },
    )
  })

  test('is convolved as the double sum does it', () => {
    fc.assert(
      fc.property(signal, signal, (a, b) => {
        const result = convolve(a, b)
        expect(result.length).toBe(a.length + b.length - 1)
        result.forEach((value, n) => {
          let sum = 0
          for (let k = Math.max(0, n - b.length + 1); k <= Math.min(n, a.length - 1); k++) sum += a[k] * b[n - k]
          expect(Math.abs(value - sum)).toBeLessThan(1e-9)
        })
      }),
      { seed: 72 },
    )
  })
})

test('arguments are not changed, and results not shared', () => {
  const x = Float64Array.of(1, 2, 3, 4)
  const first = realTransform(x)
  const copy = first.re.slice()
  realTransform(Float64Array.of(5, 6, 7, 8))
  expect(first.re).toEqual(copy)
  expect(x).toEqual(Float64Array.of(1, 2, 3, 4))
})

test('wrong lengths are refused', () => {
  expect(nextPowerOfTwo(1)).toBe(2)
  expect(nextPowerOfTwo(1025)).toBe(2048)
  expect(convolve(new Float64Array(0), Float64Array.of(1)).length).toBe(0)
  expect(() => realTransform(new Float64Array(0))).toThrow('must be a positive whole number, was 0')
  expect(() => realTransform(new Float64Array(4), 3)).toThrow('length must be at least 4 (the data), was 3')
  expect(() => forwardTransform(new Float64Array(4), new Float64Array(3))).toThrow('equally long, were 4 and 3')
  expect(() => inverseRealTransform(new Float64Array(3), new Float64Array(3), 8)).toThrow('has 5 bins, was 3 and 3')
})
