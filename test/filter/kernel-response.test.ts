import fc from 'fast-check'
import { expect, test } from 'vitest'
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
