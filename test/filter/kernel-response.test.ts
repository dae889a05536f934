import fc from 'fast-check'
import { describe, expect, test } from 'vitest'
import { isSymmetric, symmetricAmplitude, trigonometricSums } from '../../src/filter/kernel-response.ts'

test('sums of any kernel are the defining sums, at 0 Hz, half the sampling rate and between', () => {
  fc.assert(
    fc.property(
      fc.array(fc.double({ min: -1, max: 1, noNaN: true }), { minLength: 1, maxLength: 60 }),
      fc.array(fc.double({ min: 0, max: 1, noNaN: true }), { minLength: 1, maxLength: 11 }),
      (list, parts) => {
        const taps = Float64Array.from(list)
        const hz = Float64Array.from([...parts, 0, 1]).map((part) => part * 250)
        const { cosine, sine } = trigonometricSums(taps, hz, 500)
        hz.forEach((f, i) => {
          const angle = (2 * Math.PI * f) / 500
          const wanted = [Math.cos, Math.sin].map((of) => list.reduce((sum, tap, k) => sum + tap * of(angle * k), 0))
          expect(Math.abs(cosine[i] - wanted[0])).toBeLessThan(1e-11)
          expect(Math.abs(sine[i] - wanted[1])).toBeLessThan(1e-11)
        })
      },
    ),
    { seed: 95 },
  )
})

test('a long boxcar keeps its precision next to 0 Hz and to half the sampling rate', () => {
  // Dirichlet's kernel in closed form
  const taps = new Float64Array(20001).fill(1 / 20001)
  const near = [1e-6, 1e-4, 0.003, 0.01]
  const hz = Float64Array.from(near)
  symmetricAmplitude(taps, hz, 500).forEach((amplitude, i) => {
    const half = (Math.PI * hz[i]) / 500
    expect(Math.abs(amplitude - Math.sin(20001 * half) / (20001 * Math.sin(half)))).toBeLessThan(1e-12)
  })
  const alternating = taps.map((tap, k) => (k % 2 === 0 ? tap : -tap))
  const mirrored = hz.map((f) => 250 - f)
  const straight = symmetricAmplitude(taps, hz, 500)
  symmetricAmplitude(alternating, mirrored, 500).forEach((amplitude, i) => {
    expect(Math.abs(amplitude - straight[i])).toBeLessThan(1e-9)
  })
})

test('symmetry asks for a middle tap', () => {
  expect(isSymmetric(Float64Array.of(1, 2, 1))).toBe(true)
  expect(isSymmetric(Float64Array.of(1, 1))).toBe(false)
  expect(isSymmetric(Float64Array.of(1, 2, 3))).toBe(false)
})

describe('near 0 Hz, where a kernel turns by less than a radian', () => {
  test('both sums are the sums written out, on either side of the turn and for negative frequencies', () => {
    const samplingRateHz = 500
    const taps = Float64Array.from({ length: 400 }, (_, k) => Math.sin(1 + k * k) / (1 + k / 50))
    let size = 0
    for (const tap of taps) size += Math.abs(tap)
    const turnHz = samplingRateHz / (2 * Math.PI * (taps.length - 1))
    const hz = Float64Array.from([0, 1e-9, 0.1, 0.5, 0.99, 1.01, 1.5, -0.5, -1.5], (share) => share * turnHz)
    const { cosine, sine } = trigonometricSums(taps, hz, samplingRateHz)
    hz.forEach((frequency, i) => {
      let c = 0
      let s = 0
      for (let k = 0; k < taps.length; k++) {
        const angle = (2 * Math.PI * k * frequency) / samplingRateHz
        c += taps[k] * Math.cos(angle)
        s += taps[k] * Math.sin(angle)
      }
      expect(Math.abs(cosine[i] - c)).toBeLessThanOrEqual(1e-14 * size)
      expect(Math.abs(sine[i] - s)).toBeLessThanOrEqual(1e-14 * size)
    })
  })

  test('a single tap has no sine and its own cosine', () => {
    const { cosine, sine } = trigonometricSums(Float64Array.of(3), Float64Array.of(0, 100, 250), 500)
    expect([...cosine]).toEqual([3, 3, 3])
    expect([...sine]).toEqual([0, 0, 0])
  })
})
