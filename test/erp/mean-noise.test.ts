import fc from 'fast-check'
import { expect, test } from 'vitest'
import { meanNoise } from '../../src/erp/mean-noise.ts'
import { noiseDensity, type NoiseTable } from '../../src/erp/noise.ts'

const powerLaw = (exponent: number, level: number): NoiseTable => {
  const hz = Float64Array.of(0.02, 1, 10, 100)
  return { kind: 'table', hz, uv2PerHz: hz.map((f) => level * f ** -exponent) }
}

test('of a noise and itself is that noise', () => {
  const noise = powerLaw(1.3, 7)
  const mean = meanNoise(noise, noise)
  const hz = Float64Array.from({ length: 200 }, (_, i) => 0.01 * 1.05 ** i)
  const density = noiseDensity(noise, hz)
  noiseDensity(mean, hz).forEach((value, i) => expect(value).toBeCloseTo(density[i], 9))
})

test('lies halfway at every frequency, to 0.3 %, for exponents as different as noises have', () => {
  const exponent = fc.double({ min: 0, max: 3, noNaN: true })
  const level = fc.double({ min: 0.1, max: 50, noNaN: true })
  fc.assert(
    fc.property(exponent, exponent, level, level, (e1, e2, l1, l2) => {
      const [a, b] = [powerLaw(e1, l1), powerLaw(e2, l2)]
      const hz = Float64Array.from({ length: 300 }, (_, i) => 0.015 * 1.031 ** i)
      const [da, db, mean] = [a, b, meanNoise(a, b)].map((noise) => noiseDensity(noise, hz))
      mean.forEach((value, i) => {
        const exact = (da[i] + db[i]) / 2
        expect(Math.abs(value - exact)).toBeLessThanOrEqual(3e-3 * exact)
      })
    }),
  )
})

test('keeps every frequency that either was measured at', () => {
  const second: NoiseTable = { kind: 'table', hz: Float64Array.of(0.5, 7), uv2PerHz: Float64Array.of(2, 0) }
  const mean = meanNoise(powerLaw(1, 1), second)
  for (const f of [0.02, 0.5, 1, 7, 10, 100]) expect(mean.hz).toContain(f)
  expect(noiseDensity(mean, Float64Array.of(7))[0]).toBeCloseTo(1 / 14, 9)
})
